import { request as httpRequest } from 'node:http';
import { connect } from 'node:net';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { statusOf } from '../../../services/coordinator/api/problem.ts';
import { problem } from '../../../services/coordinator/api/schemas.ts';
import type { ErrorCode } from '../../../shared/contract/error-table.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { type ApiServer, apiServer, EXECUTION, problemIn } from '../../support/api-server.ts';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer();
});
afterEach(() => server.close());

const inputs = () => ({ inputs: { basinFile: join(server.root, 'basin.yaml') } });
describe('the Host header', () => {
  const statusWithHost = (host: string) =>
    new Promise<number | undefined>((resolve, reject) => {
      const request = httpRequest({ host: '127.0.0.1', port: server.port, path: '/jobs', headers: { host } });
      request.on('response', (response) => {
        response.resume();
        resolve(response.statusCode);
      });
      request.on('error', reject).end();
    });

  it('must be a name of this machine where only this machine is served', async () => {
    for (const host of ['localhost', `localhost:${server.port}`, '127.0.0.1:1', '[::1]:8080', 'LOCALHOST']) {
      expect(await statusWithHost(host), host).toBe(200);
    }
    for (const host of [
      'evil.example',
      'localhost.evil.example',
      '127.0.0.1.nip.example',
      'evil.example:80',
      '0.0.0.0',
    ]) {
      expect(await statusWithHost(host), host).toBe(421);
    }
  });

  it('is free where others are served', async () => {
    const open = await apiServer({ host: '0.0.0.0' });
    try {
      const answer = await new Promise((resolve) => {
        httpRequest({ host: '127.0.0.1', port: open.port, path: '/', headers: { host: 'coordinator:8080' } })
          .on('response', (response) => resolve(response.resume().statusCode))
          .end();
      });
      expect(answer).toBe(200);
    } finally {
      await open.close();
    }
  });
});

describe('answers', () => {
  it('carry the security headers, problems too', async () => {
    for (const path of ['/', '/nothing', '/jobs/%zz', '/openapi.json']) {
      const { headers } = await server.fetch(path, { headers: { origin: 'https://evil.example' } });
      expect(headers.get('x-content-type-options'), path).toBe('nosniff');
      expect(headers.get('access-control-allow-origin')).toBeNull();
      expect(headers.get('cache-control')).toBe('no-store');
      expect(headers.get('x-powered-by')).toBeNull();
    }
  });

  it('say nothing of what went wrong inside; the log does, under the same instance', async () => {
    server.runs.refusal = new TypeError('cannot read password hunter2');
    const members = await problemIn(await server.send('POST', EXECUTION, inputs()), 500);
    expect(members).toMatchObject({ code: 'INTERNAL' });
    expect(JSON.stringify(members)).not.toContain('hunter2');
    expect(server.log()).toContain('hunter2');
    expect(server.log()).toContain(members.instance);
  });

  it('map errors of the table to a status each', async () => {
    const status = (code: ErrorCode) => statusOf(new BasinloomError(code));
    expect(status('RUN_LOCKED')).toBe(409);
    expect(status('RUN_NOT_FOUND')).toBe(404);
    expect(status('RASTER_CORRUPT')).toBe(422);
    expect(status('BOUNDARY_MISSING')).toBe(422);
    expect(status('CRS_UNKNOWN')).toBe(422);
    expect(status('STORE_WRITE')).toBe(500);
    expect(status('INTERNAL')).toBe(500);
    expect(status('QUEUE_UNREACHABLE')).toBe(503);
    server.runs.refusal = new BasinloomError('RUN_LOCKED', { path: 'out', pid: 7 });
    expect(await problemIn(await server.send('POST', EXECUTION, inputs()), 409)).toMatchObject({ code: 'RUN_LOCKED' });
    server.runs.refusal = new BasinloomError('QUEUE_UNREACHABLE', { url: 'redis://x', detail: 'gone' });
    expect((await server.send('POST', EXECUTION, inputs())).headers.get('retry-after')).toBe('10');
  });

  it('to what is no HTTP are problems too', async () => {
    const answer = await new Promise<string>((resolve) => {
      let text = '';
      const socket = connect(server.port, '127.0.0.1', () => socket.write('not http at all\r\n\r\n'));
      socket.on('data', (chunk) => {
        text += chunk;
      });
      socket.on('close', () => resolve(text));
    });
    expect(answer).toMatch(/^HTTP\/1\.1 400 Bad Request\r\nContent-Type: application\/problem\+json/);
    expect(problem.parse(JSON.parse(answer.split('\r\n\r\n')[1]))).toMatchObject({
      status: 400,
      code: 'REQUEST_SYNTAX',
    });
  });

  it('cannot be had where the port is taken', async () => {
    await expect(apiServer({ port: server.port })).rejects.toMatchObject({ code: 'ENVIRONMENT' });
  });
});
