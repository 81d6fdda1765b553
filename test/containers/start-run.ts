import { setTimeout as sleep } from 'node:timers/promises';
import type { ComposeServices } from './compose-services.ts';

/** A run on the services. */
export interface ContainerRun {
  readonly isOver: boolean;
  /** @throws Error with the coordinator's words when the run does not end well */
  readonly ended: Promise<void>;
}

interface Status {
  readonly status: 'accepted' | 'running' | 'successful' | 'failed' | 'dismissed';
  readonly message?: string;
}

/** Starts a run of /data/basin.yaml into /data/<out>, through the published port of the coordinator. */
export async function startRun(services: ComposeServices, out: string): Promise<ContainerRun> {
  const answer = await fetch(new URL('/processes/basin-run/execution', await services.url()), {
    method: 'POST',
    headers: { authorization: `Bearer ${services.token}`, 'content-type': 'application/json' },
    body: JSON.stringify({ inputs: { basinFile: '/data/basin.yaml', out: `/data/${out}` } }),
  });
  const location = answer.headers.get('location');
  if (answer.status !== 201 || !location) throw new Error(`refused: ${answer.status} ${await answer.text()}`);
  const run = { isOver: false };
  const ended = untilOver(services, location)
    .finally(() => {
      run.isOver = true;
    })
    .then(({ status, message }) => {
      if (status !== 'successful') throw new Error(`the run is ${status}: ${message}`);
    });
  // Whoever waits for the end hears of a failure; nobody waits while the test looks at the run from outside.
  ended.catch(() => {});
  return Object.assign(run, { ended });
}

async function untilOver(services: ComposeServices, job: string): Promise<Status> {
  for (;;) {
    await sleep(100);
    // A coordinator that was killed is silent for a while, and has another port on this machine when it is back.
    const answer = await services
      .url()
      .then((base) => fetch(new URL(job, base)))
      .catch(() => undefined);
    if (!answer) continue;
    if (!answer.ok) throw new Error(`${job}: ${answer.status} ${await answer.text()}`);
    const status = (await answer.json()) as Status;
    if (status.status !== 'accepted' && status.status !== 'running') return status;
  }
}
