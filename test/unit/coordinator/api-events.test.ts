import { request as httpRequest } from 'node:http';
import { setTimeout as delay } from 'node:timers/promises';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { type ApiServer, apiServer } from '../../support/api-server.ts';

let server: ApiServer;
beforeEach(async () => {
  server = await apiServer({ heartbeatMs: 30, maxStreams: 3 });
});
afterEach(() => server.close());

interface Reader {
  readonly response: Response;
  readonly controller: AbortController;
  /** All that has come, up to the first text that the test holds for; or to the end. */
  until(test: (text: string) => boolean): Promise<string>;
  readonly end: () => Promise<string>;
}

async function follow(id: string): Promise<Reader> {
  const controller = new AbortController();
  const response = await server.fetch(`/jobs/${id}/events`, { signal: controller.signal });
  const chunks = response.body?.pipeThrough(new TextDecoderStream())[Symbol.asyncIterator]();
  let text = '';
  const until = async (test: (text: string) => boolean) => {
    while (!test(text)) {
      const next = await chunks?.next();
      if (!next || next.done) break;
      text += next.value;
    }
    return text;
  };
  return { response, controller, until, end: () => until(() => false) };
}

/** Frames of a stream: WHATWG HTML, section 9.2.6. Comments are left out. */
function eventsIn(text: string): { event: string; data: Record<string, unknown> }[] {
  return text
    .split('\n\n')
    .filter((frame) => frame.startsWith('event: '))
    .map((frame) => {
      const [first, second, ...others] = frame.split('\n');
      expect(second).toMatch(/^data: /);
      expect(others).toEqual([]);
      return { event: first.slice('event: '.length), data: JSON.parse(second.slice('data: '.length)) };
    });
}

const counts = (total: number, done: number) => ({ total, done, kept: 0, setAside: 0 });
const error = new BasinloomError('RASTER_TRUNCATED', { file: 'a\nb.tif', place: 'block 1' }).toRecord();

describe('the events of a run', () => {
  it('come as they happen, and the stream ends with the run', async () => {
    server.runs.add('r1');
    const reader = await follow('r1');
    expect(reader.response.headers.get('content-type')).toMatch(/^text\/event-stream/);
    expect(reader.response.headers.get('x-content-type-options')).toBe('nosniff');
    server.runs.tell('r1', (listener) => {
      listener.stage('prepare', counts(2, 0));
      listener.leftOut({ kind: 'tile', id: 'prepare/1', gap: true, error });
      listener.note('waiting', { job: 'prepare/0' });
      listener.settled('prepare', counts(2, 1));
    });
    server.runs.end('r1', 'complete-with-gaps');
    const events = eventsIn(await reader.end());
    expect(events.map(({ event }) => event)).toEqual(['status', 'stage', 'left-out', 'note', 'progress', 'end']);
    expect(events[0].data).toMatchObject({ jobID: 'r1', status: 'accepted' });
    expect(events[1].data).toEqual({ stage: 'prepare', ...counts(2, 0) });
    expect(events[2].data).toEqual({ kind: 'tile', id: 'prepare/1', gap: true, error });
    expect(events[3].data).toEqual({ message: 'waiting', job: 'prepare/0' });
    expect(events[4].data).toEqual({ stage: 'prepare', ...counts(2, 1) });
    expect(events[5].data).toMatchObject({ jobID: 'r1', status: 'successful' });
    await vi.waitFor(() => expect(server.runs.watching('r1')).toBe(0));
  });

  it('of thousands of jobs are few, and the last count is among them', async () => {
    server.runs.add('r1');
    const reader = await follow('r1');
    for (let done = 1; done <= 5000; done++) {
      server.runs.tell('r1', (listener) => listener.settled('flux', counts(5000, done)));
    }
    // Without an end: the timer alone must bring it.
    const progress = eventsIn(await reader.until((text) => /event: progress\n.*\n\n/.test(text))).slice(1);
    expect(progress).toEqual([{ event: 'progress', data: { stage: 'flux', ...counts(5000, 5000) } }]);
    server.runs.end('r1', 'complete');
    expect(eventsIn(await reader.end()).map(({ event }) => event)).toEqual(['status', 'progress', 'end']);
  });

  it('of a run that has ended are its status and the end', async () => {
    server.runs.add('r1', { state: 'failed', error });
    const events = eventsIn(await (await follow('r1')).end());
    expect(events.map(({ event, data }) => [event, data.status])).toEqual([
      ['status', 'failed'],
      ['end', 'failed'],
    ]);
  });

  it('go to every reader, and a silent stream shows that it lives', async () => {
    server.runs.add('r1');
    const readers = [await follow('r1'), await follow('r1')];
    for (const reader of readers) expect(await reader.until((text) => text.includes(': '))).toContain('\n\n');
    await readers[0].until((text) => text.includes(': still here\n\n'));
    server.runs.tell('r1', (listener) => listener.note('hello', {}));
    for (const reader of readers) await reader.until((text) => text.includes('hello'));
    server.runs.end('r1', 'stopped');
    for (const reader of readers) expect(eventsIn(await reader.end()).at(-1)?.data.status).toBe('dismissed');
  });

  it('are no longer listened to when the reader goes', async () => {
    server.runs.add('r1');
    const staying = await follow('r1');
    const leaving = await follow('r1');
    expect(server.runs.watching('r1')).toBe(2);
    leaving.controller.abort();
    await vi.waitFor(() => expect(server.runs.watching('r1')).toBe(1));
    server.runs.tell('r1', (listener) => listener.note('still told', {}));
    expect(await staying.until((text) => text.includes('still told'))).toContain('still told');
  });

  it('are not listened to for a reader who goes before the stream is open', async () => {
    server.runs.add('r1');
    const watch = server.runs.watch.bind(server.runs);
    const gate = Promise.withResolvers<void>();
    server.runs.watch = async (...args) => {
      await gate.promise;
      return watch(...args);
    };
    const request = httpRequest({ port: server.port, host: '127.0.0.1', path: '/jobs/r1/events' }).end();
    request.on('error', () => {});
    await delay(50);
    request.destroy();
    await delay(50);
    gate.resolve();
    await delay(50);
    expect(server.runs.watching('r1')).toBe(0);
    expect(server.log()).not.toContain('"level":50');
  });

  it('go to a limited number of readers, and a place that is left is free again', async () => {
    server.runs.add('r1');
    const readers = [await follow('r1'), await follow('r1'), await follow('r1')];
    const refused = await server.fetch('/jobs/r1/events');
    expect(refused.status).toBe(503);
    expect(await refused.json()).toMatchObject({ code: 'STREAMS_FULL' });
    readers[0].controller.abort();
    await vi.waitFor(async () => {
      const again = await follow('r1');
      expect(again.response.status).toBe(200);
    });
    // A failed try takes no place.
    expect((await server.fetch('/jobs/nobody/events')).status).toBe(503);
  });

  it('of no run take no place', async () => {
    for (let index = 0; index < 5; index++) expect((await server.fetch('/jobs/nobody/events')).status).toBe(404);
  });

  it('end when the coordinator closes', async () => {
    server.runs.add('r1');
    const reader = await follow('r1');
    await server.close();
    expect(eventsIn(await reader.end()).map(({ event }) => event)).toEqual(['status']);
    expect(server.runs.watching('r1')).toBe(0);
    server = await apiServer();
  });

  it('do not keep an answer on its way from being finished when the coordinator closes', async () => {
    server.runs.add('r1');
    const gate = Promise.withResolvers<void>();
    const get = server.runs.get.bind(server.runs);
    server.runs.get = async (id) => {
      await gate.promise;
      return get(id);
    };
    const answer = server.fetch('/jobs/r1');
    await delay(50);
    const closed = server.close();
    await delay(50);
    gate.resolve();
    expect(await (await answer).json()).toMatchObject({ jobID: 'r1' });
    await closed;
    server = await apiServer();
  });

  it('have no head without them', async () => {
    server.runs.add('r1');
    expect((await server.fetch('/jobs/r1/events', { method: 'HEAD' })).status).toBe(405);
    expect((await server.fetch('/jobs/r1', { method: 'HEAD' })).status).toBe(200);
  });
});
