import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import type { Registry } from 'prom-client';

export interface HealthOptions {
  readonly host: string;
  /** 0 takes any free port. */
  readonly port: number;
  /** True while the service can take work. */
  readonly isReady: () => boolean;
  readonly metrics: Registry;
}

/** /livez answers while the process turns, /readyz while it takes work, /metrics in the Prometheus text format. */
export class HealthServer {
  readonly #server: Server;

  private constructor(server: Server) {
    this.#server = server;
  }

  static async start({ host, port, isReady, metrics }: HealthOptions): Promise<HealthServer> {
    const server = createServer((request, response) => {
      const answer = (status: number, type: string, body: string) => {
        response.writeHead(status, { 'content-type': type }).end(body);
      };
      if (request.url === '/livez') answer(200, 'text/plain', 'ok\n');
      else if (request.url === '/readyz') {
        if (isReady()) answer(200, 'text/plain', 'ok\n');
        else answer(503, 'text/plain', 'not ready\n');
      } else if (request.url === '/metrics') {
        metrics.metrics().then(
          (text) => answer(200, metrics.contentType, text),
          (error: Error) => answer(500, 'text/plain', `${error.message}\n`),
        );
      } else answer(404, 'text/plain', 'not found\n');
    });
    await new Promise<void>((resolve, reject) => {
      server.once('error', reject);
      server.listen(port, host, resolve);
    });
    return new HealthServer(server);
  }

  get port(): number {
    return (this.#server.address() as AddressInfo).port;
  }

  async close(): Promise<void> {
    this.#server.closeAllConnections();
    await new Promise((done) => this.#server.close(done));
  }
}
