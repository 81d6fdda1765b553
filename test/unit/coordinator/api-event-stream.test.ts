import type { ServerResponse } from 'node:http';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { EventStream } from '../../../services/coordinator/api/event-stream.ts';

beforeEach(() => {
  vi.useFakeTimers();
});
afterEach(() => {
  vi.useRealTimers();
});

/** A connection that keeps what is written, as far behind as the test says. */
function connection() {
  const frames: string[] = [];
  const response = {
    frames,
    writableLength: 0,
    destroyed: false,
    writeHead: () => response,
    write: (frame: string) => frames.push(frame),
    end: () => frames.push('(end)'),
    destroy: () => {
      response.destroyed = true;
    },
  };
  return response;
}

function open() {
  const response = connection();
  const stream = new EventStream(response as unknown as ServerResponse);
  stream.open({}, 15_000);
  return { response, stream, frames: response.frames };
}

const settled = (stream: EventStream, done: number) =>
  stream.listener.settled('flux', { total: 1000, done, kept: 0, setAside: 0 });
const donesIn = (frames: readonly string[]) =>
  frames.flatMap((frame) => /"done":(\d+)/.exec(frame)?.[1] ?? []).map(Number);

describe('one event stream', () => {
  it('sends progress four times a second at most, whatever the number of jobs', () => {
    const { stream, frames } = open();
    for (let job = 1; job <= 200; job++) {
      settled(stream, job);
      vi.advanceTimersByTime(10);
    }
    // Two seconds of the made clock: a job every 10 ms, the counts as they were each 250 ms.
    expect(donesIn(frames)).toEqual([25, 50, 75, 100, 125, 150, 175, 200]);
  });

  it('sends what is held back before the next stage and before the end, and nothing after it', () => {
    const { stream, frames } = open();
    settled(stream, 1);
    stream.listener.stage('overlap', { total: 7, done: 0, kept: 0, setAside: 0 });
    settled(stream, 2);
    stream.end('end', { status: 'successful' });
    settled(stream, 3);
    stream.send('note', {});
    stream.end('end', {});
    vi.advanceTimersByTime(60_000);
    expect(frames.map((frame) => frame.split('\n')[0])).toEqual([
      'event: status',
      'event: progress',
      'event: stage',
      'event: progress',
      'event: end',
      '(end)',
    ]);
    expect(vi.getTimerCount()).toBe(0);
  });

  it('shows that it lives every heartbeat', () => {
    const { frames } = open();
    vi.advanceTimersByTime(45_000);
    expect(frames.slice(1)).toEqual([': still here\n\n', ': still here\n\n', ': still here\n\n']);
  });

  it('lets a reader go that does not read, instead of keeping all for it', () => {
    const { response, stream, frames } = open();
    response.writableLength = 2 * 1024 * 1024;
    stream.send('note', { message: 'one too many' });
    expect(response.destroyed).toBe(true);
    stream.send('note', { message: 'more' });
    expect(frames).toHaveLength(1);
    expect(vi.getTimerCount()).toBe(0);
  });

  it('writes nothing to a connection that was closed before it was open', () => {
    const response = connection();
    const stream = new EventStream(response as unknown as ServerResponse);
    stream.send('note', {});
    response.destroyed = true;
    stream.open({}, 15_000);
    expect(response.frames).toEqual([]);
    expect(vi.getTimerCount()).toBe(0);
  });
});
