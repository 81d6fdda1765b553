import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { Registry } from 'prom-client';
import { expect, it } from 'vitest';
import { HealthServer } from '../../../shared/service/health-server.ts';

const script = fileURLToPath(new URL('../../../infra/health-check.ts', import.meta.url));

/** Exit code of the image's health check for a service with this port. */
async function check(port: number): Promise<number> {
  const child = spawn(process.execPath, [script], { env: { ...process.env, BASINLOOM_HEALTH_PORT: String(port) } });
  const [code] = (await once(child, 'exit')) as [number];
  return code;
}

it('is healthy while the service takes work, and not before it does nor after it is gone', async () => {
  let isReady = false;
  const server = await HealthServer.start({
    host: '127.0.0.1',
    port: 0,
    isReady: () => isReady,
    metrics: new Registry(),
  });
  const { port } = server;
  expect(await check(port)).toBe(1);
  isReady = true;
  expect(await check(port)).toBe(0);
  await server.close();
  expect(await check(port)).toBe(1);
});
