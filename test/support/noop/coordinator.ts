import '../../../shared/service/lean-heap.ts';

import { BullmqEngine } from '../../../shared/engine/bullmq/bullmq-engine.ts';
import { JobQueues } from '../../../shared/engine/bullmq/job-queues.ts';
import { noopJobs } from './jobs.ts';

/** A coordinator that only queues and counts: coordinator.ts <redis url> <version> <jobs>. */
const [url, version, count] = process.argv.slice(2);
const queues = await JobQueues.open({ url }, version, (error) => console.error(error.message));
const engine = new BullmqEngine({ queues, run: `noop${process.pid}`, store: '/nowhere' });
const { signal } = new AbortController();
const ids = new Set<number>();
let settled = 0;
let most = 0;
const started = performance.now();
for await (const { job, status } of engine.run(noopJobs(Number(count)), {
  signal,
  isDone: () => Promise.resolve(false),
})) {
  if (status === 'done') ids.add(job.tile);
  settled++;
  if (settled % 1000 === 0) most = Math.max(most, process.memoryUsage.rss());
}
const seconds = (performance.now() - started) / 1000;
console.log(JSON.stringify({ settled, different: ids.size, seconds, residentBytes: most }));
await queues.close();
process.exit(0);
