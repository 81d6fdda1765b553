import { Counter, collectDefaultMetrics, Gauge, Histogram, Registry } from 'prom-client';
import type { Stage } from '../contract/jobs.ts';
import type { JobOutcome } from '../engine/bullmq/job-consumer.ts';

/** What a service that takes jobs tells Prometheus. Names and base units as Prometheus asks for them. */
export class JobMetrics {
  readonly registry = new Registry();
  readonly #jobs: Counter<'stage' | 'outcome'>;
  readonly #seconds: Histogram<'stage'>;

  /** @param busy jobs in hand now */
  constructor(service: string, busy: () => number) {
    const { registry } = this;
    const registers = [registry];
    registry.setDefaultLabels({ service });
    collectDefaultMetrics({ register: registry });
    this.#jobs = new Counter({
      name: 'basinloom_jobs_total',
      help: 'Jobs that this process took, by stage and outcome',
      labelNames: ['stage', 'outcome'],
      registers,
    });
    this.#seconds = new Histogram({
      name: 'basinloom_job_duration_seconds',
      help: 'Time from taking a job to its end',
      labelNames: ['stage'],
      buckets: [0.01, 0.03, 0.1, 0.3, 1, 3, 10, 30, 100, 300],
      registers,
    });
    new Gauge({
      name: 'basinloom_jobs_in_hand',
      help: 'Jobs that this process works on',
      registers,
      collect() {
        this.set(busy());
      },
    });
  }

  job(stage: Stage, outcome: JobOutcome, seconds: number): void {
    this.#jobs.inc({ stage, outcome });
    if (outcome === 'done') this.#seconds.observe({ stage }, seconds);
  }
}
