import { collectDefaultMetrics, Gauge, Registry } from 'prom-client';
import type { JobQueues } from '../../shared/engine/bullmq/job-queues.ts';
import { SERVICES } from '../../shared/engine/bullmq/naming.ts';
import type { RunRegistry } from './run-registry.ts';

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
    const depth = (name: string, help: string) => new Gauge({ name, help, labelNames: ['queue'], registers });
    const waiting = depth('basinloom_queue_waiting_jobs', 'Jobs that wait for a worker, by queue');
    const active = depth('basinloom_queue_active_jobs', 'Jobs that workers have in hand, by queue');
    const workers = new Gauge({
      name: 'basinloom_queue_workers',
      help: 'Processes that take jobs, by queue',
      labelNames: ['queue'],
      registers,
      async collect() {
        for (const queue of SERVICES) {
          const counts = await queues.of(queue).counts();
          waiting.set({ queue }, counts.waiting);
          active.set({ queue }, counts.active);
          workers.set({ queue }, counts.workers);
        }
      },
    });
  }
}
