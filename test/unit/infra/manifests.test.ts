import { describe, expect, it } from 'vitest';
import { CoordinatorMetrics } from '../../../services/coordinator/coordinator-metrics.ts';
import { unsafe } from '../../../shared/engine/bullmq/check-redis.ts';
import { SERVICES } from '../../../shared/engine/bullmq/naming.ts';
import { readEnvironment } from '../../../shared/service/environment.ts';
import { SOFTWARE } from '../../../shared/service/software.ts';
import { SERVICE_VARIABLES, type ServiceProcess } from '../../../shared/service/variables.ts';
import { problemsOf } from '../../support/manifest-rules.ts';
import { bytes, manifests, redisDirectives, type Yaml } from '../../support/manifests.ts';

const all = manifests();
const documents = all.map(({ document }) => document).filter(({ kind }) => kind !== 'Kustomization');
const named = (kind: string, name: string): Yaml =>
  documents.find((document) => document.kind === kind && document.metadata.name === name);
const NAMES = Object.keys(SERVICE_VARIABLES) as ServiceProcess[];
const podOf = (name: string) => named('Deployment', name).spec.template.spec;
const configuration = named('ConfigMap', 'basinloom').data;

/** What the cluster would put in. */
function standIn({ secretKeyRef, resourceFieldRef }: Yaml, { resources }: Yaml): string {
  if (secretKeyRef) return 'x'.repeat(48);
  return resources.limits[resourceFieldRef.resource.replace('limits.', '')];
}

describe('infra/kubernetes', () => {
  it('keeps the rules of pods, references, selectors and autoscaling', () => {
    expect(problemsOf(documents)).toEqual([]);
  });

  it('is listed whole in its kustomization', () => {
    const { document } = all.find(({ file }) => file === 'kustomization.yaml')!;
    const files = new Set(all.map(({ file }) => file).filter((file) => file !== 'kustomization.yaml'));
    expect(new Set(document.resources)).toEqual(files);
    expect(document.images).toEqual([{ name: 'basinloom', newTag: SOFTWARE.version }]);
  });

  it.each(NAMES)('gives %s the one image, its main file and variables that it reads', (name) => {
    const [container] = podOf(name).containers;
    expect(container.image).toBe(`basinloom:${SOFTWARE.version}`);
    expect(container.args).toEqual([`services/${name}/main.ts`]);
    const own = Object.fromEntries(
      (container.env ?? []).map(({ name: key, value, valueFrom }: Yaml) => [
        key,
        value ?? standIn(valueFrom, container),
      ]),
    );
    const variables: Record<string, string> = { ...configuration, ...own };
    expect(Object.keys(SERVICE_VARIABLES[name])).toEqual(expect.arrayContaining(Object.keys(variables)));
    const environment = readEnvironment(SERVICE_VARIABLES[name], variables);
    expect(podOf(name).terminationGracePeriodSeconds).toBeGreaterThan(environment.BASINLOOM_STOP_SECONDS + 5);
    if ('BASINLOOM_THREADS' in environment) expect(environment.BASINLOOM_THREADS).toBe(2);
    expect(container.livenessProbe.httpGet.path).toBe('/livez');
    expect(container.readinessProbe.httpGet.path).toBe('/readyz');
  });

  it('has one coordinator at a time and takes its token from a secret', () => {
    const { spec } = named('Deployment', 'coordinator');
    expect([spec.replicas, spec.strategy.type]).toEqual([1, 'Recreate']);
    const [{ env }] = podOf('coordinator').containers;
    const token = env.find(({ name }: Yaml) => name === 'BASINLOOM_TOKEN');
    expect(token.valueFrom.secretKeyRef).toBeDefined();
    expect(documents.filter(({ kind }) => kind === 'Secret')).toEqual([]);
  });

  it.each(SERVICES)('scales %s by a gauge that the coordinator has', async (service) => {
    const counts = { waiting: 7, active: 0, workers: 1 };
    const queues = { of: () => ({ counts: () => Promise.resolve(counts) }) };
    const text = await new CoordinatorMetrics({ running: 0 }, queues as never).registry.metrics();
    const [{ external }] = named('HorizontalPodAutoscaler', service).spec.metrics;
    const { queue } = external.metric.selector.matchLabels;
    expect(queue).toBe(service);
    expect(text).toMatch(new RegExp(`^${external.metric.name}\\{.*queue="${queue}".*\\} 7$`, 'm'));
    expect(named('PodDisruptionBudget', service)).toBeDefined();
  });

  it('runs Redis as the services ask for it, with the settings of infra/redis.conf', () => {
    const directives = redisDirectives(named('ConfigMap', 'redis').data['redis.conf']);
    expect(directives).toEqual(redisDirectives());
    const aof = directives.get('appendonly') === 'yes' ? '1' : '0';
    const info = new Map([
      ['redis_version', '7.2.0'],
      ['maxmemory_policy', directives.get('maxmemory-policy')!],
      ['aof_enabled', aof],
    ]);
    expect(unsafe(info, directives.get('save') === '""' ? '' : null)).toBeNull();
    const { limits } = named('StatefulSet', 'redis').spec.template.spec.containers[0].resources;
    expect(bytes(limits.memory)).toBeGreaterThanOrEqual(2 * bytes(directives.get('maxmemory')!));
  });
});

describe('the rules', () => {
  const spoilt: readonly (readonly [problem: string, spoil: (find: typeof named) => void])[] = [
    ['worker: a probe is missing', (find) => delete podIn(find, 'worker').containers[0].readinessProbe],
    ['worker: limits are missing', (find) => delete podIn(find, 'worker').containers[0].resources.limits.memory],
    ['worker: image without a fixed tag', (find) => (podIn(find, 'worker').containers[0].image = 'basinloom:latest')],
    ['worker: may run as root', (find) => (podIn(find, 'worker').securityContext.runAsNonRoot = false)],
    [
      'worker: no ConfigMap basinlom',
      (find) => (podIn(find, 'worker').containers[0].envFrom[0].configMapRef.name = 'basinlom'),
    ],
    [
      'Service coordinator: selects 0 workloads',
      (find) => (find('Service', 'coordinator').spec.selector['app.kubernetes.io/component'] = 'coordinater'),
    ],
    [
      'Deployment worker: selects other pods',
      (find) => (find('Deployment', 'worker').spec.selector.matchLabels['app.kubernetes.io/component'] = 'mosaicker'),
    ],
    [
      'HorizontalPodAutoscaler worker: fights with replicas',
      (find) => (find('Deployment', 'worker').spec.replicas = 3),
    ],
  ];
  const podIn = (find: typeof named, name: string) => find('Deployment', name).spec.template.spec;

  it.each(spoilt)('find "%s"', (problem, spoil) => {
    const copy: Yaml[] = structuredClone(documents);
    spoil((kind, name) => copy.find((one) => one.kind === kind && one.metadata.name === name));
    expect(problemsOf(copy)).toEqual([problem]);
  });
});
