import { BasinloomError } from '../contract/errors.ts';
import { redisAddress } from '../engine/bullmq/address.ts';
import { JobConsumer } from '../engine/bullmq/job-consumer.ts';
import type { ServiceName } from '../engine/bullmq/naming.ts';
import { ThreadPool } from '../engine/thread-pool.ts';
import { healthPort, jobServiceVariables, readEnvironment } from './environment.ts';
import { HealthServer } from './health-server.ts';
import { JobMetrics } from './job-metrics.ts';
import { serviceLogger } from './logger.ts';
import { HEALTH_PORTS } from './ports.ts';
import { SOFTWARE } from './software.ts';
import { stopRequested } from './stop.ts';

/**
 * The whole life of a service that takes jobs: reads its environment, serves the queue until SIGTERM or SIGINT,
 * lets the jobs in hand finish, and ends.
 *
 * @param threadFile file whose default export does one job
 * @returns the exit code
 */
export async function serveJobs(service: ServiceName, threadFile: string): Promise<number> {
  const stop = stopRequested();
  let log = serviceLogger(service, 'info');
  try {
    const variables = { ...jobServiceVariables, ...healthPort(HEALTH_PORTS[service]) };
    const environment = readEnvironment(variables, process.env);
    log = serviceLogger(service, environment.BASINLOOM_LOG_LEVEL);
    let consumer: JobConsumer | undefined;
    const metrics = new JobMetrics(service, () => consumer?.busy ?? 0);
    const health = await HealthServer.start({
      host: environment.BASINLOOM_HEALTH_HOST,
      port: environment.BASINLOOM_HEALTH_PORT,
      isReady: () => consumer?.isReady ?? false,
      metrics: metrics.registry,
    });
    consumer = await JobConsumer.start({
      address: redisAddress(environment.BASINLOOM_REDIS_URL, process.env),
      service,
      version: SOFTWARE.version,
      runner: new ThreadPool(environment.BASINLOOM_THREADS, () => threadFile),
      concurrency: environment.BASINLOOM_THREADS,
      lockMs: environment.BASINLOOM_LOCK_SECONDS * 1000,
      log,
      onJob: (...job) => metrics.job(...job),
    });
    log.info({ threads: environment.BASINLOOM_THREADS, healthPort: health.port }, 'ready');
    log.info({ signal: await stop }, 'stopping');
    await consumer.close(environment.BASINLOOM_STOP_SECONDS * 1000);
    await health.close();
    log.info('stopped');
    return 0;
  } catch (thrown) {
    const error = BasinloomError.from(thrown);
    log.fatal({ error: error.toRecord() }, error.message);
    return error.entry.exit;
  }
}
