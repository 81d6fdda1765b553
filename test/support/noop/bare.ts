import { Queue, QueueEvents } from 'bullmq';
import { noopJobs } from './jobs.ts';

/** A bare queue of the same jobs, in bulks, counted by events: bare.ts <redis url> <jobs>. */
const { hostname, port } = new URL(process.argv[2]);
const connection = { host: hostname, port: Number(port), maxRetriesPerRequest: null };
const count = Number(process.argv[3]);
const queue = new Queue('bare', { connection });
const events = new QueueEvents('bare', { connection });
await events.waitUntilReady();
let done = 0;
let wake: () => void = () => {};
events.on('completed', () => {
  done++;
  wake();
});
const started = performance.now();
let added = 0;
let bulk = [];
for (const job of noopJobs(count)) {
  bulk.push({ name: job.stage, data: job, opts: { jobId: job.id } });
  if (bulk.length < 250 && added + bulk.length < count) continue;
  added += bulk.length;
  await queue.addBulk(bulk);
  bulk = [];
  while (added - done > 2000) await new Promise<void>((resolve) => (wake = resolve));
}
while (done < count) await new Promise<void>((resolve) => (wake = resolve));
console.log(JSON.stringify({ settled: done, seconds: (performance.now() - started) / 1000 }));
process.exit(0);
