#!/usr/bin/env node
import '../../shared/service/lean-heap.ts';

import { hostname } from 'node:os';
import { BasinloomError } from '../../shared/contract/errors.ts';
import { redisAddress } from '../../shared/engine/bullmq/address.ts';
import { BullmqEngine } from '../../shared/engine/bullmq/bullmq-engine.ts';
import { JobQueues } from '../../shared/engine/bullmq/job-queues.ts';
import { coordinatorVariables, healthPort, readEnvironment } from '../../shared/service/environment.ts';
import { HealthServer } from '../../shared/service/health-server.ts';
import { serviceLogger } from '../../shared/service/logger.ts';
import { HEALTH_PORTS } from '../../shared/service/ports.ts';
import { SOFTWARE } from '../../shared/service/software.ts';
import { stopRequested, within } from '../../shared/service/stop.ts';
import { openStore } from '../../shared/store/open-store.ts';
import { startApi } from './api/start-api.ts';
import { CoordinatorMetrics } from './coordinator-metrics.ts';
import { RunRegistry } from './run-registry.ts';
import { Schedules } from './schedules.ts';

/** The coordinator service: carries runs for whoever asks, and takes up what an earlier life left open. */
async function coordinate(): Promise<number> {
  const stop = stopRequested();
  let log = serviceLogger('coordinator', 'info');
  try {
    const variables = { ...coordinatorVariables, ...healthPort(HEALTH_PORTS.coordinator) };
    const environment = readEnvironment(variables, process.env);
    log = serviceLogger('coordinator', environment.BASINLOOM_LOG_LEVEL);
    let isReady = false;
    const address = redisAddress(environment.BASINLOOM_REDIS_URL, process.env);
    const queues = await JobQueues.open(address, SOFTWARE.version, (error) =>
      log.warn({ error: error.message }, 'queue'),
    );
    const home = openStore(environment.BASINLOOM_HOME);
    const registry = new RunRegistry({
      home,
      openEngine: (run, store) => new BullmqEngine({ queues, run, store }),
      log,
      now: () => new Date(),
      host: hostname(),
      process: process.pid,
      software: SOFTWARE,
    });
    const metrics = new CoordinatorMetrics(registry, queues);
    const health = await HealthServer.start({
      host: environment.BASINLOOM_HEALTH_HOST,
      port: environment.BASINLOOM_HEALTH_PORT,
      isReady: () => isReady,
      metrics: metrics.registry,
    });
    const resumed = await registry.resume();
    const schedules = new Schedules(home, address, (error) => log.warn({ error: error.message }, 'queue'));
    await schedules.serve(registry, log, address);
    const api = await startApi({
      runs: registry,
      host: environment.BASINLOOM_HTTP_HOST,
      port: environment.BASINLOOM_HTTP_PORT,
      token: environment.BASINLOOM_TOKEN,
      roots: environment.BASINLOOM_ROOTS,
      urls: environment.BASINLOOM_URLS,
      log,
    });
    isReady = true;
    log.info({ resumed, httpPort: api.port, healthPort: health.port }, 'ready');
    log.info({ signal: await stop }, 'stopping');
    isReady = false;
    const deadline = environment.BASINLOOM_STOP_SECONDS * 1000;
    // A request to cancel a run waits for the run, and a reader of events may be slow: neither may hold up the stop.
    const closed = api.close();
    await within(schedules.close(), deadline);
    await within(registry.close(), deadline);
    await within(closed, 1000);
    await health.close();
    await within(queues.close(), 2000);
    log.info('stopped');
    return 0;
  } catch (thrown) {
    const error = BasinloomError.from(thrown);
    log.fatal({ error: error.toRecord() }, error.message);
    return error.entry.exit;
  }
}

process.exit(await coordinate());
