import { bytes, type Yaml } from './manifests.ts';

/** What a set of Kubernetes documents breaks of the rules that its pods and its references must keep. */
export function problemsOf(documents: readonly Yaml[]): string[] {
  const named = (kind: string, name: string) =>
    documents.find((one) => one.kind === kind && one.metadata.name === name);
  const workloads = documents.filter(({ kind }) => kind === 'Deployment' || kind === 'StatefulSet');
  return [
    ...workloads.flatMap((workload) => podProblems(workload)),
    ...workloads.flatMap((workload) => referenceProblems(workload, named)),
    ...documents.flatMap((document) => selectorProblems(document, workloads)),
    ...documents
      .filter(({ kind }) => kind === 'HorizontalPodAutoscaler')
      .flatMap((autoscaler) => scalingProblems(autoscaler, named)),
  ];
}

const when = (isBroken: boolean, problem: string) => (isBroken ? [problem] : []);

function podProblems({ metadata, spec }: Yaml): string[] {
  const pod = spec.template.spec;
  const where = metadata.name as string;
  return [
    ...when(pod.securityContext?.runAsNonRoot !== true, `${where}: may run as root`),
    ...when(!(pod.securityContext?.runAsUser > 0), `${where}: no user by number`),
    ...when(pod.securityContext?.seccompProfile?.type !== 'RuntimeDefault', `${where}: no seccomp profile`),
    ...when(pod.automountServiceAccountToken !== false, `${where}: carries a token of the cluster`),
    // A Service called basinloom-http would set BASINLOOM_HTTP_PORT in every pod.
    ...when(pod.enableServiceLinks !== false, `${where}: variables of services leak in`),
    ...when(!(pod.terminationGracePeriodSeconds > 0), `${where}: no grace period`),
    ...pod.containers.flatMap((container: Yaml) => containerProblems(where, container)),
  ];
}

function containerProblems(where: string, container: Yaml): string[] {
  const { image, livenessProbe, readinessProbe, resources, securityContext, ports = [] } = container;
  const hasPort = (probe: Yaml) => {
    const port = probe?.httpGet?.port ?? probe?.tcpSocket?.port;
    return port === undefined || ports.some(({ name }: Yaml) => name === port);
  };
  const { requests, limits } = resources ?? {};
  const isOver = requests?.memory && limits?.memory && bytes(requests.memory) > bytes(limits.memory);
  return [
    ...when(!/:[\w.-]+$/.test(image) || image.endsWith(':latest'), `${where}: image without a fixed tag`),
    ...when(!livenessProbe || !readinessProbe, `${where}: a probe is missing`),
    ...when(!hasPort(livenessProbe) || !hasPort(readinessProbe), `${where}: probes a port that is not there`),
    ...when(!requests?.cpu || !requests?.memory, `${where}: requests are missing`),
    ...when(!limits?.cpu || !limits?.memory, `${where}: limits are missing`),
    ...when(Boolean(isOver), `${where}: requests over limits`),
    ...when(securityContext?.readOnlyRootFilesystem !== true, `${where}: root file system can be written`),
    ...when(securityContext?.allowPrivilegeEscalation !== false, `${where}: privileges can grow`),
    ...when(!securityContext?.capabilities?.drop?.includes('ALL'), `${where}: keeps capabilities`),
  ];
}

function referenceProblems({ metadata, spec }: Yaml, named: (kind: string, name: string) => Yaml): string[] {
  const where = metadata.name as string;
  const pod = spec.template.spec;
  const claims = (spec.volumeClaimTemplates ?? []).map((claim: Yaml) => claim.metadata.name);
  const volumes = [...(pod.volumes ?? []).map(({ name }: Yaml) => name), ...claims];
  const missing = (kind: string, name: string | undefined) =>
    when(name !== undefined && !named(kind, name), `${where}: no ${kind} ${name}`);
  return [
    ...(pod.volumes ?? []).flatMap((volume: Yaml) => [
      ...missing('PersistentVolumeClaim', volume.persistentVolumeClaim?.claimName),
      ...missing('ConfigMap', volume.configMap?.name),
    ]),
    ...pod.containers.flatMap((container: Yaml) => [
      ...(container.envFrom ?? []).flatMap((from: Yaml) => missing('ConfigMap', from.configMapRef?.name)),
      ...container.volumeMounts.flatMap(({ name }: Yaml) =>
        when(!volumes.includes(name), `${where}: no volume ${name}`),
      ),
    ]),
  ];
}

type Labels = Readonly<Record<string, string>>;

function selectorProblems({ kind, metadata, spec }: Yaml, workloads: readonly Yaml[]): string[] {
  const labelsOf = (workload: Yaml): Labels => workload.spec.template.metadata.labels;
  const isIn = (wanted: Labels, labels: Labels) =>
    Object.entries(wanted).every(([key, value]) => labels[key] === value);
  const where = `${kind} ${metadata?.name}`;
  if (kind === 'Deployment' || kind === 'StatefulSet') {
    return when(!isIn(spec.selector.matchLabels, spec.template.metadata.labels), `${where}: selects other pods`);
  }
  const wanted: Labels | undefined = { Service: spec?.selector, PodDisruptionBudget: spec?.selector?.matchLabels }[
    kind as 'Service'
  ];
  if (!wanted) return [];
  const matching = workloads.filter((workload) => isIn(wanted, labelsOf(workload)));
  if (matching.length !== 1) return [`${where}: selects ${matching.length} workloads`];
  const ports = matching[0].spec.template.spec.containers.flatMap((container: Yaml) => container.ports ?? []);
  return (spec.ports ?? []).flatMap(({ targetPort }: Yaml) =>
    when(!ports.some(({ name }: Yaml) => name === targetPort), `${where}: no port ${targetPort}`),
  );
}

function scalingProblems({ metadata, spec }: Yaml, named: (kind: string, name: string) => Yaml): string[] {
  const where = `HorizontalPodAutoscaler ${metadata.name}`;
  const target = named(spec.scaleTargetRef.kind, spec.scaleTargetRef.name);
  return [
    ...when(!target, `${where}: scales nothing`),
    ...when(target?.spec.replicas !== undefined, `${where}: fights with replicas`),
    ...when(!(spec.minReplicas >= 1 && spec.maxReplicas > spec.minReplicas), `${where}: has no room`),
  ];
}
