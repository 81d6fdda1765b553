#!/usr/bin/env node
import '../../shared/service/lean-heap.ts';

import { hostname } from 'node:os';
import { redisAddress } from '../../shared/engine/bullmq/address.ts';
import { BullmqEngine } from '../../shared/engine/bullmq/bullmq-engine.ts';
import { JobQueues } from '../../shared/engine/bullmq/job-queues.ts';
import { within } from '../../shared/engine/within.ts';
import { HealthServer } from '../../shared/service/health-server.ts';
import { runService } from '../../shared/service/run-service.ts';
import { SOFTWARE } from '../../shared/service/software.ts';
import { SERVICE_VARIABLES } from '../../shared/service/variables.ts';
import { openStore } from '../../shared/store/open-store.ts';
import { startApi } from './api/start-api.ts';
import { CoordinatorMetrics } from './coordinator-metrics.ts';
import { RunRegistry } from './run-registry.ts';
import { Schedules } from './schedules.ts';

/** How long connections have to close when the work is done, ms. */
const CLOSE_MS = 2000;

/** The coordinator service: carries runs for whoever asks, and takes up what an earlier life left open. */
const exitCode = await runService('coordinator', SERVICE_VARIABLES.coordinator, async (environment, log) => {
  let isReady = false;
  const onError = (error: Error) => log.warn({ error: error.message }, 'queue');
  const address = redisAddress(environment.BASINLOOM_REDIS_URL, process.env);
  const queues = await JobQueues.open(address, SOFTWARE.version, onError);
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
  const health = await HealthServer.start({
    host: environment.BASINLOOM_HEALTH_HOST,
    port: environment.BASINLOOM_HEALTH_PORT,
    isReady: () => isReady,
    metrics: new CoordinatorMetrics(registry, queues).registry,
  });
  const resumed = await registry.resume();
  const schedules = new Schedules(home, address, onError);
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
  return {
    details: { resumed, httpPort: api.port, healthPort: health.port },
    async close() {
      isReady = false;
      // A request to cancel a run waits for the run, and a reader of events may be slow: neither may hold up the stop.
      const closed = api.close();
      await within(Promise.all([schedules.close(), registry.close()]), environment.BASINLOOM_STOP_SECONDS * 1000);
      await within(Promise.all([closed, health.close(), queues.close()]), CLOSE_MS);
    },
  };
});

// Not by exitCode: nothing may keep a service alive that has stopped.
process.exit(exitCode);
