import { setTimeout as sleep } from 'node:timers/promises';
import { Queue, QueueEvents } from 'bullmq';
import { noopJobs } from './jobs.ts';

/** A bare queue of the same jobs, in bulks, until none is left: bare.ts <redis url> <jobs>. */
const { hostname, port } = new URL(process.argv[2]);
const connection = { host: hostname, port: Number(port), maxRetriesPerRequest: null };
const count = Number(process.argv[3]);
const queue = new Queue('bare', { connection });
// Who waits for jobs hears of each; but events may be lost, so the end is told by the counts.
const events = new QueueEvents('bare', { connection });
let heard = 0;
events.on('completed', () => heard++);
await events.waitUntilReady();
const unfinished = () => queue.getJobCountByTypes('waiting', 'active');
const started = performance.now();
let added = 0;
let bulk = [];
for (const job of noopJobs(count)) {
  bulk.push({ name: job.stage, data: job, opts: { jobId: `${process.pid}-${job.id}` } });
  if (bulk.length < 250 && added + bulk.length < count) continue;
  added += bulk.length;
  await queue.addBulk(bulk);
  bulk = [];
  while ((await unfinished()) > 2000) await sleep(5);
}
while ((await unfinished()) > 0) await sleep(5);
console.log(JSON.stringify({ settled: count, heard, seconds: (performance.now() - started) / 1000 }));
process.exit(0);
