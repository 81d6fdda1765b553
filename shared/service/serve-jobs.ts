import { redisAddress } from '../engine/bullmq/address.ts';
import { JobConsumer } from '../engine/bullmq/job-consumer.ts';
import type { ServiceName } from '../engine/bullmq/naming.ts';
import { ThreadPool } from '../engine/thread-pool.ts';
import { HealthServer } from './health-server.ts';
import { JobMetrics } from './job-metrics.ts';
import { runService } from './run-service.ts';
import { SOFTWARE } from './software.ts';
import { SERVICE_VARIABLES } from './variables.ts';

/**
 * The whole life of a service that takes jobs from the queue.
 *
 * @param threadFile file whose default export does one job
 * @returns the exit code
 */
export function serveJobs(service: ServiceName, threadFile: string): Promise<number> {
  return runService(service, SERVICE_VARIABLES[service], async (environment, log) => {
    let consumer: JobConsumer | undefined;
    const metrics = new JobMetrics(service, () => consumer?.busy ?? 0);
    const health = await HealthServer.start({
      host: environment.BASINLOOM_HEALTH_HOST,
      port: environment.BASINLOOM_HEALTH_PORT,
      isReady: () => consumer?.isReady ?? false,
      metrics: metrics.registry,
    });
    const threads = environment.BASINLOOM_THREADS;
    consumer = await JobConsumer.start({
      address: redisAddress(environment.BASINLOOM_REDIS_URL, process.env),
      service,
      version: SOFTWARE.version,
      runner: new ThreadPool(threads, () => threadFile),
      concurrency: threads,
      lockMs: environment.BASINLOOM_LOCK_SECONDS * 1000,
      log,
      onJob: (...job) => metrics.job(...job),
    });
    return {
      details: { threads, healthPort: health.port },
      async close() {
        await consumer.close(environment.BASINLOOM_STOP_SECONDS * 1000);
        await health.close();
      },
    };
  });
}
