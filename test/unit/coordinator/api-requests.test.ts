import { symlink, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { SMALLEST_BASIN_FILE } from '../../../infra/docs/basin-file-page.ts';
import { type ApiServer, apiServer, EXECUTION, problemIn, TOKEN } from '../../support/api-server.ts';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer();
});
afterEach(() => server.close());

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
