import { setTimeout as sleep } from 'node:timers/promises';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { ThreadAnswer } from '../../../shared/engine/thread-answer.ts';

/** Job ids say what happens: "ok-1", "bad-1", "flaky-1" (fails twice with an error that can pass), "crash-1". */
const seen = new Int32Array(new SharedArrayBuffer(4));

export default async function run({ job }: { job: { id: string } }): Promise<ThreadAnswer> {
  const [kind] = job.id.split('-');
  await sleep(1);
  if (kind === 'bad') {
    return { ok: false, error: new BasinloomError('RASTER_TRUNCATED', { file: 'f', place: 'block 1' }).toRecord() };
  }
  if (kind === 'flaky' && Atomics.add(seen, 0, 1) < 2) {
    return { ok: false, error: new BasinloomError('STORE_WRITE', { path: 'p', detail: 'full' }).toRecord() };
  }
  if (kind === 'crash') process.exit(9);
  return { ok: true };
}
