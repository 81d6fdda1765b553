import { pino } from 'pino';
import { JobConsumer } from '../../../shared/engine/bullmq/job-consumer.ts';

/** A worker process whose jobs do nothing: consumer.ts <redis url> <version> <concurrency>. */
const [url, version, concurrency] = process.argv.slice(2);
await JobConsumer.start({
  address: { url },
  service: 'worker',
  version,
  runner: { run: () => Promise.resolve(null), close: () => Promise.resolve() },
  concurrency: Number(concurrency),
  lockMs: 30_000,
  log: pino({ level: 'error' }),
});
process.once('SIGTERM', () => process.exit(0));
console.log('ready');
