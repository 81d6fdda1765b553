import type { ServerResponse } from 'node:http';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { RunListener, StageCounts, StageName } from '../progress.ts';
import { SECURITY_HEADERS } from './guards.ts';

/** Least time between two progress events of a stream, ms. */
const PROGRESS_EVERY_MS = 250;

/** A reader that is this far behind is let go, bytes. */
const MAX_BACKLOG = 1 << 20;

/** Server-sent events (WHATWG HTML, section 9.2) of one run to one reader. */
export class EventStream {
  readonly listener: RunListener = {
    stage: (stage, counts) => this.#stage(stage, counts),
    settled: (stage, counts) => this.#settled(stage, counts),
    leftOut: (entry) => this.send('left-out', entry),
    note: (message, fields) => this.send('note', { message, ...fields }),
  };
  readonly #response: ServerResponse;
  readonly #latest = new Map<StageName, Readonly<StageCounts>>();
  #waiting: string[] | null = [];
  #timer: NodeJS.Timeout | undefined;
  #heartbeat: NodeJS.Timeout | undefined;
  #isOver = false;

  constructor(response: ServerResponse) {
    this.#response = response;
  }

  /** Writes the head, how the run stands, and what has come in meanwhile. */
  open(status: unknown, heartbeatMs: number): void {
    if (this.#response.destroyed) return;
    this.#response.writeHead(200, {
      ...SECURITY_HEADERS,
      'content-type': 'text/event-stream; charset=utf-8',
      // The coordinator must not wait, when it closes, for a connection that has done its work.
      connection: 'close',
      // For proxies that would collect the answer first.
      'x-accel-buffering': 'no',
    });
    const waiting = this.#waiting ?? [];
    this.#waiting = null;
    for (const frame of [frameOf('status', status), ...waiting]) this.#response.write(frame);
    if (this.#isOver) this.#response.end();
    else this.#heartbeat = setInterval(() => this.#write(': still here\n\n'), heartbeatMs);
  }

  send(event: string, data: unknown): void {
    if (!this.#isOver) this.#write(frameOf(event, data));
  }

  /** Sends what is held back, a last event, and closes. */
  end(event?: string, data?: unknown): void {
    if (this.#isOver) return;
    this.#flush();
    if (event !== undefined) this.send(event, data);
    this.stop();
    if (this.#waiting === null) this.#response.end();
  }

  /** Ends the timers; nothing is sent any more. */
  stop(): void {
    this.#isOver = true;
    clearTimeout(this.#timer);
    clearInterval(this.#heartbeat);
  }

  #stage(stage: StageName, counts: Readonly<StageCounts>): void {
    this.#flush();
    this.send('stage', { stage, ...counts });
  }

  /** Thousands of jobs may settle in a second: only how it stands now and then is sent. */
  #settled(stage: StageName, counts: Readonly<StageCounts>): void {
    if (this.#isOver) return;
    this.#latest.set(stage, { ...counts });
    this.#timer ??= setTimeout(() => this.#flush(), PROGRESS_EVERY_MS);
  }

  #flush(): void {
    clearTimeout(this.#timer);
    this.#timer = undefined;
    for (const [stage, counts] of this.#latest) this.send('progress', { stage, ...counts });
    this.#latest.clear();
  }

  #write(frame: string): void {
    if (this.#waiting) this.#waiting.push(frame);
    else if (this.#response.destroyed) this.stop();
    else if (this.#response.writableLength > MAX_BACKLOG) {
      this.stop();
      this.#response.destroy();
    } else this.#response.write(frame);
  }
}

/** JSON has no raw line break, so one data line holds it. */
function frameOf(event: string, data: unknown): string {
  return `event: ${event}\ndata: ${JSON.stringify(data)}\n\n`;
}

/** The open event streams: counted, and closed together. */
export class EventStreams {
  readonly #open = new Set<EventStream>();
  readonly #limit: number;
  readonly heartbeatMs: number;

  constructor({ limit, heartbeatMs }: { readonly limit: number; readonly heartbeatMs: number }) {
    this.#limit = limit;
    this.heartbeatMs = heartbeatMs;
  }

  /** @throws BasinloomError STREAMS_FULL */
  add(response: ServerResponse): EventStream {
    if (this.#open.size >= this.#limit) throw new BasinloomError('STREAMS_FULL', { limit: this.#limit });
    const stream = new EventStream(response);
    this.#open.add(stream);
    return stream;
  }

  delete(stream: EventStream): void {
    stream.stop();
    this.#open.delete(stream);
  }

  get size(): number {
    return this.#open.size;
  }

  close(): void {
    for (const stream of this.#open) stream.end();
  }
}
