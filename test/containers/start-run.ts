import type { ComposeServices } from './compose-services.ts';

/** A run on the services. */
export interface ContainerRun {
  readonly isOver: boolean;
  /** @throws Error with the coordinator's words when the run does not end well */
  readonly ended: Promise<void>;
}

/** Starts a run of /data/basin.yaml into /data/<out>, by the command in the coordinator's container. */
export async function startRun(services: ComposeServices, out: string): Promise<ContainerRun> {
  const [coordinator] = await services.containers('coordinator');
  const run = { isOver: false };
  const settings = ['--set', 'engine=redis://redis:6379'];
  const ended = coordinator
    .run('node', 'services/cli/main.ts', 'run', '/data/basin.yaml', '--out', `/data/${out}`, ...settings)
    .finally(() => {
      run.isOver = true;
    })
    .then(({ exitCode, output }) => {
      if (exitCode !== 0) throw new Error(`the run ended with ${exitCode}: ${output}`);
    });
  // Whoever waits for the end hears of a failure; nobody waits while the test looks at the run from outside.
  ended.catch(() => {});
  return Object.assign(run, { ended });
}
