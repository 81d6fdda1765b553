import type { Registry } from 'prom-client';
import type { z } from 'zod';
import { CoordinatorMetrics } from '../../services/coordinator/coordinator-metrics.ts';
import { SERVICES } from '../../shared/engine/bullmq/naming.ts';
import { sharedVariables } from '../../shared/service/environment.ts';
import { JobMetrics } from '../../shared/service/job-metrics.ts';
import { HEALTH_PORTS } from '../../shared/service/ports.ts';
import { SERVICE_VARIABLES, type ServiceProcess } from '../../shared/service/variables.ts';
import { code, page, table } from './markdown.ts';

const DUTIES: Readonly<Record<ServiceProcess, string>> = {
  coordinator: 'takes runs over HTTP, plans them, puts their jobs in the queue, keeps their records',
  worker: 'computes tiles: terrain, scenes, energy balance, days, periods',
  mosaicker: 'puts tiles together: mosaics, tallies, tables, catalogue, report',
};
/** Defaults that depend on the machine or on the service. */
const COMPUTED: Readonly<Record<string, string>> = {
  BASINLOOM_THREADS: 'all processors',
  BASINLOOM_HEALTH_PORT: 'see above',
};
const HEAD = ['Variable', 'Default', 'Meaning'];

/** docs/reference/services.md: variables, ports and metrics, from the tables that the services themselves read. */
export function servicesPage(): string {
  const own = (service: ServiceProcess, but: object) =>
    Object.entries(SERVICE_VARIABLES[service]).filter(([name]) => !(name in but));
  const shared = {
    ...sharedVariables,
    BASINLOOM_HEALTH_PORT: SERVICE_VARIABLES.coordinator.BASINLOOM_HEALTH_PORT,
  };
  return page('Services', [
    'On one machine a run needs none of this: `basinloom run` computes on its own threads. On several, three services ' +
      'share a queue in Redis (6.2 or newer, `noeviction`, append-only file: `infra/redis.conf`) and a store that all ' +
      'of them reach under the same name. All are one image and one version; a worker of another version takes no job ' +
      'of this one.',
    table(
      ['Service', 'What it does', 'Start', 'Health port'],
      (Object.keys(HEALTH_PORTS) as ServiceProcess[]).map((service) => [
        service,
        DUTIES[service],
        code(`node services/${service}/main.ts`),
        String(HEALTH_PORTS[service]),
      ]),
    ),
    'The image sets `BASINLOOM_HEALTH_HOST=0.0.0.0` and `BASINLOOM_HEALTH_PORT=9100` for every service.',
    '## Variables',
    'A service reads its settings from the environment alone, once, at its start. One that is empty counts as not set; ' +
      'one that is wrong ends the service with `ENVIRONMENT` and its name.',
    '### Every service',
    table(HEAD, Object.entries(shared).map(variableRow)),
    '### Coordinator',
    table(HEAD, own('coordinator', shared).map(variableRow)),
    '### Worker and mosaicker',
    table(HEAD, own('worker', shared).map(variableRow)),
    '## Health',
    '`GET /livez` answers 200 while the process turns: restart it when it does not. `GET /readyz` answers 200 while it ' +
      'takes work, and 503 before its start is through and from SIGTERM on, of worker and mosaicker also while Redis is ' +
      'away. Neither asks for a token; the port belongs to the inner network.',
    '## Stopping',
    'SIGTERM and SIGINT: no further work is taken, what is in hand may finish for `BASINLOOM_STOP_SECONDS` and is then ' +
      'given back, and the service ends with 0. Give it a longer grace than that. A second signal, or SIGKILL, ends it ' +
      'at once, and its jobs go to others when its locks are over (`BASINLOOM_LOCK_SECONDS`). The coordinator takes open ' +
      'runs up again at its next start. In no case is anything lost, or computed again that the store has.',
    '## Metrics',
    '`GET /metrics` on the health port, in the Prometheus text format, each with the label `service`; besides these, ' +
      'the usual ones of the process and of Node.js. `basinloom_queue_waiting_jobs` is what to scale workers by.',
    '### Of the coordinator',
    metricsTable(new CoordinatorMetrics({ running: 0 }, { of: neverAsked }).registry),
    '### Of worker and mosaicker',
    metricsTable(new JobMetrics(SERVICES[0], () => 0).registry),
  ]);
}

function variableRow([name, schema]: [string, z.ZodType]): string[] {
  const { success, data } = schema.safeParse(undefined);
  const isSet = data !== undefined && !(Array.isArray(data) && data.length === 0);
  const fallback = COMPUTED[name] ?? (isSet ? code(String(data)) : success ? '' : 'none: must be set');
  return [code(name), fallback, schema.description ?? ''];
}

interface Described {
  readonly name: string;
  readonly type: string;
  readonly help: string;
  readonly labelNames: readonly string[];
}

function metricsTable(registry: Registry): string {
  // The library's types leave the labels out.
  const all = registry.getMetricsAsArray() as unknown as readonly Described[];
  const own = all.filter(({ name }) => name.startsWith('basinloom_'));
  return table(
    ['Metric', 'Type', 'Labels', 'Meaning'],
    own.map(({ name, type, labelNames, help }) => [code(name), type, labelNames.map(code).join(', '), help]),
  );
}

/** The page names the gauges; nobody reads them. */
function neverAsked(): never {
  throw new Error('no queue here');
}
