import type { ServerResponse } from 'node:http';
import type { EventStream } from '../event-stream.ts';
import { type ApiParts, type ApiRoute, route } from '../route.ts';
import type { StatusInfo } from '../schemas.ts';
import { statusInfoOf } from '../status-info.ts';
import { jobParams } from './jobs.ts';

/** Events of the stream, as the reference page lists them. */
export const STREAM_EVENTS: Readonly<Record<string, string>> = {
  status: 'first: the run as GET /jobs/{jobID} gives it',
  stage: 'a stage begins: its name and counts',
  progress: 'counts of the stage at work, a few times a second at most',
  'left-out': 'a tile, scene, pass or product was set aside or noted, with the error',
  note: 'something worth knowing, such as waiting for disk space',
  end: 'last: the run as GET /jobs/{jobID} gives it; the stream is closed',
};

export const eventRoutes: readonly ApiRoute[] = [
  route({
    method: 'GET',
    path: '/jobs/{jobID}/events',
    operationId: 'getEvents',
    summary: 'Events of a run as they happen',
    description: `Server-sent events: ${Object.entries(STREAM_EVENTS)
      .map(([name, what]) => `"${name}" (${what})`)
      .join(', ')}. Comment lines keep the connection alive.`,
    params: jobParams,
    answers: { 200: { description: 'The stream', mediaType: 'text/event-stream' } },
    problems: [404, 503],
    handle: async ({ params, api, reply }) => {
      const { stream, status } = await follow(params.jobID, api, reply.raw);
      reply.hijack();
      stream.open(status, api.streams.heartbeatMs);
    },
  }),
];

/** Subscribes before it looks how the run stands, so nothing between the two is lost. */
async function follow(
  id: string,
  { runs, streams }: ApiParts,
  response: ServerResponse,
): Promise<{ stream: EventStream; status: StatusInfo }> {
  const stream = streams.add(response);
  let unsubscribe = () => {};
  const close = () => {
    unsubscribe();
    streams.delete(stream);
  };
  response.once('close', close);
  try {
    unsubscribe = await runs.watch(id, stream.listener, (record) => stream.end('end', statusInfoOf({ record })));
    const status = statusInfoOf(await runs.get(id));
    // The reader may have gone meanwhile, before there was something to unsubscribe.
    if (response.destroyed) close();
    return { stream, status };
  } catch (error) {
    close();
    throw error;
  }
}
