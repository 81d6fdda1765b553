import { join } from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { jobList, processDescription, processList, statusInfo } from '../../../services/coordinator/api/schemas.ts';
import { progressOf } from '../../../services/coordinator/api/status-info.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { type ApiServer, apiServer, EXECUTION } from '../../support/api-server.ts';

// Clauses are those of OGC API - Processes - Part 1: Core, OGC 18-062r2.
const OGC = 'http://www.opengis.net/def/exceptions/ogcapi-processes-1/1.0';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer();
});
afterEach(() => server.close());

const basinFile = () => join(server.root, 'basin.yaml');
const json = async (path: string) => (await server.fetch(path)).json();
const statusOf = async (id: string) => statusInfo.strict().parse(await json(`/jobs/${id}`));
const counts = (total: number, done: number, kept = 0, setAside = 0) => ({ total, done, kept, setAside });

describe('starting a run', () => {
  it('answers 201 with its address and its status', async () => {
    const out = join(server.root, 'out/2025');
    const body = { inputs: { basinFile: `${server.root}/out/../basin.yaml`, set: { 'grid.tile': '256' }, out } };
    const answer = await server.send('POST', EXECUTION, body);
    // /req/core/job-creation-success-async: 201, header Location, statusInfo
    expect(answer.status).toBe(201);
    const info = statusInfo.strict().parse(await answer.json());
    expect(answer.headers.get('location')).toBe(`/jobs/${info.jobID}`);
    expect(info).toMatchObject({ processID: 'basin-run', type: 'process', status: 'accepted', progress: 0 });
    expect(await json(answer.headers.get('location') ?? '')).toEqual(info);
    // The paths were made plain before they were passed on.
    expect(server.runs.started).toEqual([{ basinFile: basinFile(), set: { 'grid.tile': '256' }, out }]);
  });

  it('is described with its inputs and outputs', async () => {
    // /req/core/process-list-success, /req/ogc-process-description/json-encoding
    const { processes } = processList.parse(await json('/processes'));
    expect(processes.map(({ id }) => id)).toEqual(['basin-run']);
    const description = processDescription.parse(await json('/processes/basin-run'));
    expect(description.jobControlOptions).toEqual(['async-execute', 'dismiss']);
    expect(Object.keys(description.inputs)).toEqual(['basinFile', 'set', 'out']);
    expect(description.inputs.basinFile).toMatchObject({ minOccurs: 1, schema: { type: 'string' } });
    expect(description.inputs.out).toMatchObject({ minOccurs: 0, schema: { type: 'string' } });
    expect(description.links.find(({ rel }) => rel?.endsWith('/execute'))?.href).toBe(EXECUTION);
    for (const { title, description: text } of Object.values(description.inputs)) expect(title && text).toBeTruthy();
  });
});

describe('the status of a run', () => {
  it('follows its record', async () => {
    const stages = { terrain: counts(4, 4), prepare: counts(10, 2, 2, 1) };
    server.runs.add('r1', { stages, leftOut: 3 });
    // Table 14 (statusInfo): jobID, processID, type, status, message, created, started, finished, updated, progress
    expect(await statusOf('r1')).toMatchObject({
      jobID: 'r1',
      processID: 'basin-run',
      type: 'process',
      status: 'running',
      message: 'in stage prepare',
      created: '2025-06-01T00:00:00.000Z',
      started: '2025-06-01T00:00:00.000Z',
      updated: '2025-06-01T00:01:00.000Z',
      progress: 21,
      stages,
      setAside: 3,
    });
    expect(await statusOf('r1')).not.toHaveProperty('finished');
    expect((await statusOf('r1')).links.map(({ rel }) => rel)).toEqual(['self', 'related', 'monitor']);
  });

  it.each([
    ['complete', 'successful', 100],
    ['complete-with-gaps', 'successful', 100],
    ['stopped', 'dismissed', 0],
    ['failed', 'failed', 0],
  ] as const)('of state %s is %s', async (state, status, progress) => {
    const error = new BasinloomError('NOTHING_TO_DO', { from: 'a', to: 'b', reasons: '' }).toRecord();
    server.runs.add('r1', { state, ...(state === 'failed' && { error }) });
    const info = await statusOf('r1');
    expect(info).toMatchObject({ status, progress, finished: '2025-06-01T00:01:00.000Z' });
    // /req/core/job-success; a link to the results when there are some
    expect(info.links.some(({ rel }) => rel === 'http://www.opengis.net/def/rel/ogc/1.0/results')).toBe(
      progress === 100,
    );
    if (state === 'failed') expect(info.exception).toMatchObject({ code: 'NOTHING_TO_DO', status: 422 });
    else expect(info).not.toHaveProperty('exception');
  });

  it('of an unknown run is a problem of the type that the standard gives it', async () => {
    // /req/core/job-exception/no-such-job
    for (const path of ['/jobs/nobody', '/jobs/nobody/results', '/jobs/nobody/failures', '/jobs/nobody/events']) {
      const answer = await server.fetch(path);
      expect(answer.status, path).toBe(404);
      expect(await answer.json()).toMatchObject({ type: `${OGC}/no-such-job`, code: 'RUN_NOT_FOUND' });
    }
    expect((await server.send('DELETE', '/jobs/nobody')).status).toBe(404);
    expect((await server.send('POST', '/jobs/nobody/rerun')).status).toBe(404);
  });

  it('never goes back in progress while a run goes on', () => {
    const of = (stages: Parameters<typeof progressOf>[0]['stages']) => progressOf({ state: 'running', stages });
    const terrain = counts(4, 4);
    const prepare = counts(10, 10);
    const flux = counts(10, 10);
    const way = [
      {},
      { terrain: counts(4, 0) },
      { terrain },
      { terrain, prepare: counts(10, 5) },
      { terrain, prepare, calibrate: counts(2, 1) },
      { terrain, prepare, flux },
      { terrain, prepare, flux, overlap: counts(0, 0), day: counts(4, 4), tally: counts(1, 1), mosaic: counts(5, 5) },
      {
        terrain,
        prepare,
        flux,
        overlap: counts(0, 0),
        day: counts(4, 4),
        tally: counts(1, 1),
        integrate: counts(4, 2),
      },
      { terrain, prepare, flux, day: counts(4, 4), integrate: counts(4, 4), tally: counts(3, 0), mosaic: counts(5, 0) },
      { terrain, prepare, flux, day: counts(4, 4), integrate: counts(4, 4), publish: counts(1, 1) },
    ].map(of);
    expect(way).toEqual([...way].sort((a, b) => a - b));
    expect(way[0]).toBe(0);
    expect(way.at(-1)).toBe(99);
    // A basin without terrain loses nothing by it.
    expect(of({ prepare })).toBe(of({ terrain, prepare }));
  });
});

describe('the list of runs', () => {
  it('comes in pages, newest first, each run once though new ones start', async () => {
    for (let index = 0; index < 25; index++) server.runs.add(`r${index}`);
    const seen: string[] = [];
    let next: string | undefined = '/jobs?limit=10';
    let pages = 0;
    while (next) {
      const page = jobList.strict().parse(await json(next));
      // /req/job-list/limit-response, /req/job-list/links
      expect(page.jobs.length).toBeLessThanOrEqual(10);
      expect(page.links.find(({ rel }) => rel === 'self')).toBeDefined();
      seen.push(...page.jobs.map(({ jobID }) => jobID));
      next = page.links.find(({ rel }) => rel === 'next')?.href;
      server.runs.add(`new${pages++}`);
    }
    expect(pages).toBe(3);
    expect(seen).toEqual(Array.from({ length: 25 }, (_, index) => `r${24 - index}`));
    expect(jobList.parse(await json('/jobs')).jobs).toHaveLength(10);
  });

  it('can be cut down to statuses, over pages too', async () => {
    for (let index = 0; index < 9; index++) server.runs.add(`r${index}`, { state: index % 3 ? 'complete' : 'failed' });
    server.runs.add('live', { stages: { prepare: counts(1, 0) } });
    const ids = async (path: string) => {
      const { jobs, links } = jobList.parse(await json(path));
      return { ids: jobs.map(({ jobID }) => jobID), next: links[1]?.href ?? '' };
    };
    // /req/job-list/status-response: several values, any of which holds
    expect((await ids('/jobs?status=failed')).ids).toEqual(['r6', 'r3', 'r0']);
    expect((await ids('/jobs?status=failed,running')).ids).toEqual(['live', 'r6', 'r3', 'r0']);
    expect((await ids('/jobs?status=failed&status=running')).ids).toEqual(['live', 'r6', 'r3', 'r0']);
    const first = await ids('/jobs?status=failed&status=running&limit=2');
    expect(first.ids).toEqual(['live', 'r6']);
    expect((await ids(first.next)).ids).toEqual(['r3', 'r0']);
    expect((await ids('/jobs?processID=other')).ids).toEqual([]);
    expect((await ids('/jobs?type=process&processID=basin-run&status=running')).ids).toEqual(['live']);
  });

  it('and each status stand five hundred readers at once', async () => {
    for (let index = 0; index < 20; index++) server.runs.add(`r${index}`, { leftOut: index });
    const answers = await Promise.all(Array.from({ length: 500 }, (_, index) => statusOf(`r${index % 20}`)));
    answers.forEach(({ jobID, setAside }, index) => {
      expect([jobID, setAside]).toEqual([`r${index % 20}`, index % 20]);
    });
  });
});

describe('stopping and repeating', () => {
  it('dismisses a run that goes on, and leaves one that has ended', async () => {
    server.runs.add('live');
    server.runs.add('done', { state: 'complete' });
    const answer = await server.send('DELETE', '/jobs/live');
    // /req/dismiss/job-dismiss-success: 200, statusInfo, status dismissed
    expect(answer.status).toBe(200);
    expect(statusInfo.parse(await answer.json()).status).toBe('dismissed');
    expect((await statusOf('live')).status).toBe('dismissed');
    expect(await (await server.send('DELETE', '/jobs/done')).json()).toMatchObject({ status: 'successful' });
  });

  it('runs the same request again as a new job', async () => {
    const request = { basinFile: basinFile(), set: { 'grid.tile': '256' } };
    server.runs.add('old', { state: 'complete-with-gaps' }, request);
    const answer = await server.send('POST', '/jobs/old/rerun');
    expect(answer.status).toBe(201);
    const { jobID } = statusInfo.parse(await answer.json());
    expect(jobID).not.toBe('old');
    expect(answer.headers.get('location')).toBe(`/jobs/${jobID}`);
    expect(server.runs.started).toEqual([request]);
  });

  it('looks again at what the old request names', async () => {
    server.runs.add('old', { state: 'failed' }, { basinFile: join(server.outside, 'basin.yaml') });
    server.runs.add('changed', { state: 'failed' }, { basinFile: basinFile(), out: '/var/lib/x' });
    for (const id of ['old', 'changed']) {
      const answer = await server.send('POST', `/jobs/${id}/rerun`);
      expect(answer.status).toBe(403);
      expect(await answer.json()).toMatchObject({ code: 'PATH_OUTSIDE' });
    }
    expect(server.runs.started).toEqual([]);
  });
});
