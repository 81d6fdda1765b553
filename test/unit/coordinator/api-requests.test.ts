import { symlink, writeFile } from 'node:fs/promises';
import { request as httpRequest } from 'node:http';
import { connect } from 'node:net';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { SMALLEST_BASIN_FILE } from '../../../infra/docs/basin-file-page.ts';
import { statusOf } from '../../../services/coordinator/api/problem.ts';
import { problem } from '../../../services/coordinator/api/schemas.ts';
import { ERROR_TABLE, type ErrorCode } from '../../../shared/contract/error-table.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { type ApiServer, apiServer, EXECUTION, TOKEN } from '../../support/api-server.ts';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer();
});
afterEach(() => server.close());

/** Holds an answer to RFC 9457 and gives its members. */
async function problemIn(response: Response, status: number) {
  expect(response.status).toBe(status);
  // RFC 9457, section 3: the media type; 3.1: the members; status equals that of the response.
  expect(response.headers.get('content-type')).toMatch(/^application\/problem\+json/);
  const text = await response.text();
  expect(text).not.toMatch(/\.ts:\d+|node_modules|\bat .*\(/);
  const members = problem.strict().parse(JSON.parse(text));
  expect(members.status).toBe(status);
  expect(members.instance).toMatch(/^urn:uuid:[0-9a-f-]{36}$/);
  expect(Object.keys(ERROR_TABLE)).toContain(members.code);
  expect(members.remedy).not.toBe('');
  return members;
}

const inputs = () => ({ inputs: { basinFile: join(server.root, 'basin.yaml') } });
const post = (authorization?: string) =>
  server.fetch(EXECUTION, {
    method: 'POST',
    headers: { 'content-type': 'application/json', ...(authorization !== undefined && { authorization }) },
    body: JSON.stringify(inputs()),
  });

describe('the token', () => {
  it('is asked for by every request that changes something', async () => {
    server.runs.add('r1');
    const changes = [
      ['POST', EXECUTION],
      ['DELETE', '/jobs/r1'],
      ['POST', '/jobs/r1/rerun'],
    ];
    for (const [method, path] of changes) {
      const answer = await server.fetch(path, { method });
      expect(await problemIn(answer, 401)).toMatchObject({ code: 'TOKEN_WRONG' });
      // RFC 9110, section 15.5.2: a 401 has a WWW-Authenticate header; RFC 6750: of the scheme Bearer.
      expect(answer.headers.get('www-authenticate')).toMatch(/^Bearer /);
    }
    expect(server.runs.started).toEqual([]);
    expect((await server.runs.get('r1')).record.state).toBe('running');
  });

  it('must be the right one, whole', async () => {
    const wrong = [
      'Bearer wrong',
      `Bearer ${TOKEN}x`,
      `Bearer ${TOKEN.slice(0, -1)}`,
      `Basic ${TOKEN}`,
      TOKEN,
      'Bearer',
      '',
    ];
    for (const authorization of wrong) await problemIn(await post(authorization), 401);
    expect((await post(`Bearer ${TOKEN}`)).status).toBe(201);
    expect((await post(`bearer ${TOKEN}`)).status).toBe(201);
  });

  it('is not needed to look', async () => {
    for (const path of ['/', '/conformance', '/processes', '/jobs'])
      expect((await server.fetch(path)).status).toBe(200);
  });

  it('that is not configured means that nothing can be changed', async () => {
    const closed = await apiServer({ token: undefined });
    try {
      const members = await problemIn(await closed.send('POST', EXECUTION, inputs()), 403);
      expect(members).toMatchObject({ code: 'TOKEN_NOT_SET', remedy: expect.stringContaining('BASINLOOM_TOKEN') });
      const empty = await closed.fetch(EXECUTION, { method: 'POST', headers: { authorization: 'Bearer ' } });
      await problemIn(empty, 403);
      expect(closed.runs.started).toEqual([]);
    } finally {
      await closed.close();
    }
  });

  it('never shows in the log', async () => {
    await post(`Bearer ${TOKEN}`);
    await post('Bearer another-secret');
    await server.send('POST', EXECUTION, '{ broken');
    expect(server.log()).toContain('"status":201');
    expect(server.log()).toContain('"status":401');
    expect(server.log()).not.toContain(TOKEN);
    expect(server.log()).not.toContain('another-secret');
  });
});

describe('bodies', () => {
  it('of more than 256 KiB are refused, announced or not', async () => {
    const large = JSON.stringify({ inputs: { basinFile: 'x'.repeat(256 * 1024) } });
    expect(await problemIn(await server.send('POST', EXECUTION, large), 413)).toMatchObject({ code: 'REQUEST_SIZE' });
    const chunked = await server.fetch(EXECUTION, {
      method: 'POST',
      headers: { authorization: `Bearer ${TOKEN}`, 'content-type': 'application/json' },
      body: new Blob([large]).stream(),
      duplex: 'half',
    } as RequestInit);
    await problemIn(chunked, 413);
    expect(server.runs.started).toEqual([]);
  });

  it('that are not JSON are refused', async () => {
    expect(await problemIn(await server.send('POST', EXECUTION, '{"inputs": '), 400)).toMatchObject({
      code: 'REQUEST_SYNTAX',
    });
    await problemIn(await server.send('POST', EXECUTION, '{"__proto__": {"x": 1}, "inputs": {}}'), 400);
    for (const type of ['text/plain', 'application/x-www-form-urlencoded', 'application/xml']) {
      const headers = { authorization: `Bearer ${TOKEN}`, 'content-type': type };
      const answer = await server.fetch(EXECUTION, { method: 'POST', headers, body: JSON.stringify(inputs()) });
      expect(await problemIn(answer, 415)).toMatchObject({ code: 'REQUEST_TYPE' });
    }
  });

  it('with an unknown name are refused with the name that was surely meant', async () => {
    const { basinFile } = inputs().inputs;
    const of = async (body: unknown) => (await problemIn(await server.send('POST', EXECUTION, body), 400)).detail;
    expect(await of({ inputs: { basinfile: basinFile } })).toContain('"basinfile"; did you mean "basinFile"?');
    expect(await of({ input: {} })).toContain('unknown name "input"; did you mean "inputs"?');
    expect(await of({ ...inputs(), subscriber: {} })).toContain('unknown name "subscriber"');
  });

  it('with a wrong or missing value are refused, and all that is wrong is told', async () => {
    const of = async (body: unknown) => problemIn(await server.send('POST', EXECUTION, body), 400);
    expect((await of({ inputs: {} })).detail).toBe('body.inputs.basinFile: is missing');
    expect((await of('')).detail).toBe('body: is missing');
    expect((await of([])).detail).toBe('body: expected object, received array');
    expect((await of({ inputs: { basinFile: '' } })).code).toBe('REQUEST_VALUE');
    const { errors } = await of({ inputs: { basinFile: 1, set: { 'grid.tile': 256 }, where: 'x' } });
    expect(errors?.map(({ code, detail }) => [code, detail.split(':')[0]]).sort()).toEqual([
      ['REQUEST_KEY', 'body.inputs'],
      ['REQUEST_VALUE', 'body.inputs.basinFile'],
      ['REQUEST_VALUE', 'body.inputs.set.grid.tile'],
    ]);
  });
});

describe('places that a request names', () => {
  const codeOf = async (given: Record<string, unknown>, status = 403) =>
    (await problemIn(await server.send('POST', EXECUTION, { inputs: { ...inputs().inputs, ...given } }), status)).code;

  it('lie in the roots: no traversal, no link out, no NUL', async () => {
    await symlink(server.outside, join(server.root, 'link'));
    expect(await codeOf({ basinFile: `${server.root}/../data-evil/basin.yaml` })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ basinFile: join(server.outside, 'basin.yaml') })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ basinFile: join(server.root, 'link/basin.yaml') })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ basinFile: `${server.root}/basin.yaml\0` })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ out: '/tmp' })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ out: join(server.root, 'link') })).toBe('PATH_OUTSIDE');
    expect(await codeOf({ set: { 'region.boundary': '/etc/passwd' } })).toBe('PATH_OUTSIDE');
    expect(server.runs.started).toEqual([]);
  });

  it('are no addresses outside the list, above all none of this network', async () => {
    for (const out of ['http://169.254.169.254/latest/meta-data/', 'http://localhost:6379/', 's3://bucket/x']) {
      expect(await codeOf({ out })).toBe('URL_OUTSIDE');
      expect(await codeOf({ set: { 'scenes.0.path': out } })).toBe('URL_OUTSIDE');
    }
    expect(await codeOf({ basinFile: 'file:///etc/passwd' })).toBe('URL_OUTSIDE');
    expect(server.runs.started).toEqual([]);
  });

  it('and basin files that are missing or wrong are 422', async () => {
    expect(await codeOf({ basinFile: join(server.root, 'missing.yaml') }, 422)).toBe('BASIN_FILE_MISSING');
    await writeFile(join(server.root, 'bad.yaml'), `${SMALLEST_BASIN_FILE}terain: dem.tif\n`);
    expect(await codeOf({ basinFile: join(server.root, 'bad.yaml') }, 422)).toBe('BASIN_FILE_KEY');
  });
});

describe('addresses and methods', () => {
  it('that are not there are 404, other methods 405 with Allow', async () => {
    expect(await problemIn(await server.fetch('/nothing'), 404)).toMatchObject({ code: 'REQUEST_ADDRESS' });
    expect(await problemIn(await server.send('GET', '/processes/other'), 404)).toMatchObject({
      code: 'PROCESS_NOT_FOUND',
      // OGC 18-062r2, /req/core/process-exception/no-such-process
      type: 'http://www.opengis.net/def/exceptions/ogcapi-processes-1/1.0/no-such-process',
    });
    for (const [method, path, allow] of [
      ['PUT', '/jobs/x', 'GET, HEAD, DELETE'],
      ['PATCH', '/', 'GET, HEAD'],
      ['GET', EXECUTION, 'POST'],
      ['DELETE', '/jobs', 'GET, HEAD'],
      ['OPTIONS', '/jobs', 'GET, HEAD'],
    ]) {
      const answer = await server.send(method, path);
      expect(await problemIn(answer, 405)).toMatchObject({ code: 'REQUEST_METHOD' });
      // RFC 9110, section 15.5.6
      expect(answer.headers.get('allow')).toBe(allow);
      expect(answer.headers.get('access-control-allow-origin')).toBeNull();
    }
  });

  it('are compared as they come: no decoding leads past a route', async () => {
    for (const path of ['/jobs/%zz', '/jobs/..%2f..%2fetc', '/jobs/%00', `/jobs/${'x'.repeat(5000)}`]) {
      const answer = await server.fetch(path);
      expect([400, 404, 414], path).toContain(answer.status);
      await problemIn(answer, answer.status);
    }
  });

  it('with unknown or wrong parameters are 400', async () => {
    const of = async (query: string) => (await problemIn(await server.fetch(`/jobs?${query}`), 400)).detail;
    expect(await of('limt=3')).toContain('did you mean "limit"?');
    for (const query of ['limit=0', 'limit=1001', 'limit=x', 'limit=1.5', 'status=done', 'after=nobody']) {
      expect(await of(query)).toMatch(/^query\./);
    }
  });
});

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
