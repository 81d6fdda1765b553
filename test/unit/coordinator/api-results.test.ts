import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { linksOfResults } from '../../../services/coordinator/api/result-links.ts';
import { failures, problem, processDescription, results } from '../../../services/coordinator/api/schemas.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { type ApiServer, apiServer } from '../../support/api-server.ts';

// Clauses are those of OGC API - Processes - Part 1: Core, OGC 18-062r2.
const OGC = 'http://www.opengis.net/def/exceptions/ogcapi-processes-1/1.0';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer();
});
afterEach(() => server.close());

const json = async (path: string) => (await server.fetch(path)).json();
const counts = (total: number, done: number, kept = 0, setAside = 0) => ({ total, done, kept, setAside });

describe('results', () => {
  const put = async (key: string, text = '') => {
    const file = join(server.runs.store, key);
    await mkdir(join(file, '..'), { recursive: true });
    await writeFile(file, text);
  };

  it('are not ready, not available, or failed, as the standard says', async () => {
    server.runs.add('live');
    server.runs.add('stopped', { state: 'stopped' });
    const error = new BasinloomError('RASTER_CORRUPT', { file: 'a.tif', place: 'block 1', detail: 'x' }).toRecord();
    server.runs.add('failed', { state: 'failed', error });
    const of = async (id: string) => {
      const answer = await server.fetch(`/jobs/${id}/results`);
      expect(answer.headers.get('content-type')).toMatch(/^application\/problem\+json/);
      return { ...problem.parse(await answer.json()), status: answer.status };
    };
    // /req/core/job-results-exception/results-not-ready: 404 and this type
    expect(await of('live')).toMatchObject({ status: 404, type: `${OGC}/result-not-ready`, code: 'RESULTS_NOT_READY' });
    // The later edition's /req/core/job-results-exception/results-not-available: 404 and this type
    expect(await of('stopped')).toMatchObject({ status: 404, type: `${OGC}/result-not-available` });
    // /req/core/job-results-failed: a status that corresponds to the reason
    expect(await of('failed')).toMatchObject({ status: 422, code: 'RASTER_CORRUPT', detail: error.message });
  });

  it('link to what the store holds', async () => {
    server.runs.add('r1', { state: 'complete' });
    const keys = [
      'report.html',
      'products/collection.json',
      'products/2025-06/et-period.tif',
      'products/2025-06/item.json',
      'tables/zones.csv',
      'tables/seams.csv',
      'runs/r1/failures.json',
      'runs/r1/lineage.json',
      'runs/other/lineage.json',
    ];
    for (const key of keys) await put(key);
    // /req/core/job-results-async-document: the document results.yaml, outputs by name
    const document = results.parse(await json('/jobs/r1/results'));
    const address = (key: string) => pathToFileURL(join(server.runs.store, key)).href;
    expect(document).toMatchObject({
      report: { href: address('report.html'), type: 'text/html' },
      collection: { href: address('products/collection.json'), type: 'application/json' },
      products: [{ href: address('products/2025-06/et-period.tif') }],
      tables: [{ href: address('tables/seams.csv') }, { href: address('tables/zones.csv') }],
      failures: { href: address('runs/r1/failures.json') },
      lineage: { href: address('runs/r1/lineage.json') },
    });
    const described = processDescription.parse(await json('/processes/basin-run'));
    expect(Object.keys(described.outputs).sort()).toEqual(Object.keys(document).sort());
  });

  it('lie where the store lies', async () => {
    await put('report.html');
    const links = await linksOfResults('r1', 's3://bucket/prefix/', new LocalStore(server.runs.store));
    expect(links.report).toMatchObject({ href: 's3://bucket/prefix/report.html' });
    expect(links).not.toHaveProperty('lineage');
  });
});

describe('failures', () => {
  const leftOut = (id: string, gap: boolean) => ({
    kind: 'tile' as const,
    id,
    gap,
    error: new BasinloomError('RASTER_TRUNCATED', { file: `${id}.tif`, place: 'block 1' }).toRecord(),
  });
  const read = async (id: string) => failures.strict().parse(await json(`/jobs/${id}/failures`));
  const ids = (entries: readonly { id: string }[]) => entries.map(({ id }) => id);

  it('of a run that has ended are those of its failures.json', async () => {
    server.runs.add('r1', { state: 'complete-with-gaps' });
    const file = {
      run: 'r1',
      state: 'complete-with-gaps',
      failures: [leftOut('a', true)],
      notes: [leftOut('b', false)],
    };
    await new LocalStore(server.runs.store).put('runs/r1/failures.json', Buffer.from(JSON.stringify(file)));
    expect(await read('r1')).toMatchObject({
      jobID: 'r1',
      status: 'successful',
      failures: file.failures,
      notes: file.notes,
    });
  });

  it('of a run on its way are those of its events, of its present life', async () => {
    server.runs.add('r1', { stages: { prepare: counts(2, 0) } });
    const store = new LocalStore(server.runs.store);
    const event = (name: string, fields: object = {}) => `${JSON.stringify({ time: 'now', event: name, ...fields })}\n`;
    const lines = [
      event('left-out', leftOut('earlier', true)),
      event('end', { state: 'stopped' }),
      event('stage', { stage: 'prepare', total: 2 }),
      event('left-out', leftOut('a', true)),
      event('left-out', leftOut('a', true)),
      event('left-out', leftOut('b', false)),
      '{"time":"now","event":"left-o',
    ];
    await store.append('runs/r1/events.ndjson', Buffer.from(lines.join('')));
    const found = await read('r1');
    expect([ids(found.failures), ids(found.notes)]).toEqual([['a'], ['b']]);
    expect(found.failures[0].error.code).toBe('RASTER_TRUNCATED');
  });

  it('are none where nothing was left', async () => {
    server.runs.add('r1', { state: 'failed' });
    expect(await read('r1')).toMatchObject({ status: 'failed', failures: [], notes: [] });
  });
});
