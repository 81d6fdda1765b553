import { collectDefaultMetrics, Gauge, Registry } from 'prom-client';
import type { JobQueue, JobQueues } from '../../shared/engine/bullmq/job-queues.ts';
import { SERVICES } from '../../shared/engine/bullmq/naming.ts';
import type { RunRegistry } from './run-registry.ts';

type QueueCounts = Awaited<ReturnType<JobQueue['counts']>>;

/** What the coordinator tells Prometheus: its runs, and the depth of each queue, by which workers are scaled. */
export class CoordinatorMetrics {
  readonly registry = new Registry();

  constructor(runs: Pick<RunRegistry, 'running'>, queues: Pick<JobQueues, 'of'>) {
    const registers = [this.registry];
    this.registry.setDefaultLabels({ service: 'coordinator' });
    collectDefaultMetrics({ register: this.registry });
    new Gauge({
      name: 'basinloom_runs_running',
      help: 'Runs that this coordinator carries',
      registers,
      collect() {
        this.set(runs.running);
      },
    });
    // Each gauge asks for itself: all are collected at the same moment, so none can wait for what another one found.
    const perQueue = (name: string, help: string, read: (counts: QueueCounts) => number) =>
      new Gauge({
        name,
        help,
        labelNames: ['queue'],
        registers,
        async collect() {
          for (const queue of SERVICES) this.set({ queue }, read(await queues.of(queue).counts()));
        },
      });
    perQueue('basinloom_queue_waiting_jobs', 'Jobs that wait for a worker, by queue', ({ waiting }) => waiting);
    perQueue('basinloom_queue_active_jobs', 'Jobs that workers have in hand, by queue', ({ active }) => active);
    perQueue('basinloom_queue_workers', 'Processes that take jobs, by queue', ({ workers }) => workers);
  }
}
