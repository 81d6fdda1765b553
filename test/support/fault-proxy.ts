import { createServer, request as forward, type IncomingMessage, type ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

/** The faults of the proxy, in turn. */
const FAULTS = ['answer 503', 'drop before', 'drop after', 'cut the answer'] as const;

export interface FaultProxy {
  readonly url: string;
  readonly requests: number;
  readonly failed: Readonly<Record<(typeof FAULTS)[number], number>>;
  close(): Promise<void>;
}

/**
 * An HTTP proxy in front of a server that fails every n-th request: by status 503, by a dropped connection before
 * the server saw the request, by one after the server did what was asked, and by an answer that breaks off.
 */
export async function startFaultProxy(target: string, every: number): Promise<FaultProxy> {
  let requests = 0;
  const failed = { 'answer 503': 0, 'drop before': 0, 'drop after': 0, 'cut the answer': 0 };
  const { hostname, port } = new URL(target);

  const handle = (incoming: IncomingMessage, outgoing: ServerResponse): void => {
    requests++;
    const fault = requests % every === 0 ? FAULTS[(requests / every) % FAULTS.length] : undefined;
    if (fault) failed[fault]++;
    if (fault === 'drop before') return void incoming.socket.destroy();
    if (fault === 'answer 503') {
      incoming.resume();
      incoming.on('end', () => outgoing.writeHead(503, { 'content-length': 0 }).end());
      return;
    }
    const { method, url, headers } = incoming;
    const onward = forward({ hostname, port, method, path: url, headers }, (answer) => {
      if (fault === 'drop after') {
        answer.resume();
        answer.on('end', () => incoming.socket.destroy());
        return;
      }
      outgoing.writeHead(answer.statusCode ?? 502, answer.headers);
      if (fault === 'cut the answer') {
        answer.once('data', (chunk: Buffer) => outgoing.write(chunk.subarray(0, chunk.length / 2)));
        answer.on('end', () => incoming.socket.destroy());
      } else {
        answer.pipe(outgoing);
      }
    });
    onward.on('error', () => incoming.socket.destroy());
    incoming.on('error', () => onward.destroy());
    incoming.pipe(onward);
  };

  const server = createServer(handle);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    get requests() {
      return requests;
    },
    failed,
    close: () =>
      new Promise((resolve) => {
        server.close(() => resolve());
        server.closeAllConnections();
      }),
  };
}
