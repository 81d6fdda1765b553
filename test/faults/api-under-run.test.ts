import { beforeEach, describe, expect, it } from 'vitest';
import {
  apiOf,
  coordinatorEnvironment,
  getJson,
  type JobStatus,
  post,
  TOKEN,
  untilEnded,
} from '../support/api-client.ts';
import { QueueFixture } from '../support/queue-fixture.ts';

const READS = 500;

const queue = QueueFixture.of('tiny');
let api: string;
beforeEach(async () => {
  const topology = queue.topology({
    ...coordinatorEnvironment(queue.basin),
    BASINLOOM_URLS: 'https://archive.example/scenes/',
  });
  const coordinator = topology.start('coordinator');
  topology.start('worker');
  topology.start('mosaicker');
  await topology.ready();
  api = await apiOf(coordinator);
});

const inputs = (name: string) => ({
  basinFile: queue.basin.basinFile,
  out: queue.basin.out(name),
  set: { 'grid.tile': '128' },
});
const execute = (body: unknown, token: string | null = TOKEN) =>
  fetch(`${api}/processes/basin-run/execution`, {
    method: 'POST',
    headers: { 'content-type': 'application/json', ...(token !== null && { authorization: `Bearer ${token}` }) },
    body: typeof body === 'string' ? body : JSON.stringify(body),
  });
const start = (name: string) => post<JobStatus>(`${api}/processes/basin-run/execution`, { inputs: inputs(name) });

describe('the API of a coordinator at work', () => {
  it('answers five hundred readers and every bad request rightly, and the run is unharmed', async () => {
    const { jobID } = await start('harried');
    const job = `${api}/jobs/${jobID}`;
    const events = fetch(`${job}/events`).then((response) => response.text());
    await queue.basin.reached('harried', 0.2);
    const reads = await Promise.all(Array.from({ length: READS }, () => getJson<JobStatus>(job)));
    const during = reads.filter(({ status }) => status === 'running').length;
    expect(reads.every((status) => status.jobID === jobID)).toBe(true);
    expect(during).toBe(READS);

    const inside = inputs('other');
    const answers = {
      'no token': await execute({ inputs: inside }, null),
      'wrong token': await execute({ inputs: inside }, 'another-token-altogether'),
      'too large': await execute({ inputs: { ...inside, set: { 'region.name': 'x'.repeat(300_000) } } }),
      'not JSON': await execute('{"inputs":'),
      'unknown key': await execute({ inputs: { ...inside, basinfile: 'x' } }),
      'path that climbs out': await execute({ inputs: { ...inside, out: `${queue.basin.folder}/../elsewhere` } }),
      'basin file outside': await execute({ inputs: { ...inside, basinFile: '/etc/passwd' } }),
      'input outside': await execute({ inputs: { ...inside, set: { terrain: '/etc/hostname' } } }),
      'URL of a metadata service': await execute({
        inputs: { ...inside, set: { terrain: 'http://169.254.169.254/latest' } },
      }),
      'URL that only looks allowed': await execute({
        inputs: { ...inside, set: { terrain: 'https://archive.example.evil.example/scenes/a.tif' } },
      }),
      'store in use': await execute({ inputs: inputs('harried') }),
      'unknown run': await fetch(`${api}/jobs/none`),
      'results too early': await fetch(`${job}/results`),
    };
    const statuses = Object.fromEntries(Object.entries(answers).map(([name, { status }]) => [name, status]));
    expect(statuses).toEqual({
      'no token': 401,
      'wrong token': 401,
      'too large': 413,
      'not JSON': 400,
      'unknown key': 400,
      'path that climbs out': 403,
      'basin file outside': 403,
      'input outside': 403,
      'URL of a metadata service': 403,
      'URL that only looks allowed': 403,
      'store in use': 409,
      'unknown run': 404,
      'results too early': 404,
    });
    for (const [name, answer] of Object.entries(answers)) {
      expect(answer.headers.get('content-type'), name).toMatch(/^application\/problem\+json/);
      expect(await answer.json(), name).toMatchObject({
        status: answer.status,
        code: expect.stringMatching(/^[A-Z_]+$/),
      });
    }

    expect(await untilEnded(job)).toMatchObject({ status: 'successful', progress: 100 });
    console.log(`${during} of ${READS} readers were answered while the run was on its way`);
    await queue.basin.expectSame('harried');
    const text = await events;
    expect(text).toMatch(/^event: stage$/m);
    expect(text).toMatch(/^event: end$/m);
    const results = await fetch(`${job}/results`);
    expect(results.status).toBe(200);
    expect(JSON.stringify(await results.json())).toMatch(/zones\.csv/);
  });

  it('stops a run and does the rest of it when asked to', async () => {
    const { jobID } = await start('stopped');
    await queue.basin.reached('stopped', 0.2);
    const stopped = await fetch(`${api}/jobs/${jobID}`, {
      method: 'DELETE',
      headers: { authorization: `Bearer ${TOKEN}` },
    });
    expect(await stopped.json()).toMatchObject({ jobID, status: 'dismissed' });
    const before = await queue.basin.artefacts('stopped');
    expect(before).toBeLessThan(queue.basin.artefactCount);
    const again = await post<JobStatus>(`${api}/jobs/${jobID}/rerun`);
    expect(again.jobID).not.toBe(jobID);
    expect(await untilEnded(`${api}/jobs/${again.jobID}`)).toMatchObject({ status: 'successful' });
    await queue.basin.expectSame('stopped');
  });

  it('carries two runs at once', async () => {
    const [one, two] = await Promise.all([start('one'), start('two')]);
    expect(one.jobID).not.toBe(two.jobID);
    const ends = await Promise.all([one, two].map(({ jobID }) => untilEnded(`${api}/jobs/${jobID}`)));
    expect(ends.map(({ status }) => status)).toEqual(['successful', 'successful']);
    await queue.basin.expectSame('one');
    await queue.basin.expectSame('two');
  });
});
