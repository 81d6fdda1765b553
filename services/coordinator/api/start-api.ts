import type { Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { openStore } from '../../../shared/store/open-store.ts';
import { type ApiOptions, buildApi } from './build-api.ts';
import { isLoopback } from './guards.ts';

export interface StartApiOptions extends Pick<ApiOptions, 'runs' | 'token' | 'roots' | 'urls' | 'log'> {
  /** Address to listen on; the loopback addresses serve this machine only. */
  readonly host?: string;
  /** 0 takes any free port. */
  readonly port: number;
  readonly openStore?: ApiOptions['openStore'];
  readonly maxStreams?: number;
  readonly heartbeatMs?: number;
}

export interface RunningApi {
  readonly port: number;
  /** Takes no more requests, ends the event streams, and waits for the answers on their way. */
  close(): Promise<void>;
}

/**
 * Serves the HTTP API.
 *
 * @throws BasinloomError ENVIRONMENT for roots or urls that are none, or an address that cannot be listened on
 */
export async function startApi(options: StartApiOptions): Promise<RunningApi> {
  const host = options.host ?? '127.0.0.1';
  const app = buildApi({ openStore, maxStreams: 100, heartbeatMs: 15_000, ...options, isLocal: isLoopback(host) });
  const whenQuiet = countAnswers(app.server);
  try {
    await app.listen({ host, port: options.port });
  } catch (cause) {
    await app.close();
    const { message } = cause as Error;
    throw new BasinloomError('ENVIRONMENT', { name: 'BASINLOOM_HTTP_PORT', detail: message }, { cause });
  }
  return {
    port: (app.server.address() as AddressInfo).port,
    async close() {
      const closed = app.close();
      // A connection that was opened in advance, and never used, would hold the server open.
      whenQuiet(() => app.server.closeAllConnections());
      await closed;
    },
  };
}

/** @returns a function that calls back when no answer is on its way */
function countAnswers(server: Server): (callback: () => void) => void {
  let open = 0;
  let quiet = () => {};
  server.on('request', (_, response) => {
    open++;
    response.once('close', () => {
      open--;
      if (open === 0) quiet();
    });
  });
  return (callback) => {
    quiet = callback;
    if (open === 0) callback();
  };
}
