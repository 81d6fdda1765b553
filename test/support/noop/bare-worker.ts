import { Worker } from 'bullmq';

/** The plainest consumer there can be: bare-worker.ts <redis url> <concurrency>. */
const { hostname, port } = new URL(process.argv[2]);
const connection = { host: hostname, port: Number(port), maxRetriesPerRequest: null };
const worker = new Worker('bare', async () => ({ ok: true }), {
  connection,
  concurrency: Number(process.argv[3]),
  removeOnComplete: { count: 1000 },
});
await worker.waitUntilReady();
console.log('ready');
