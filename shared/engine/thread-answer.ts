import { BasinloomError, type ErrorRecord } from '../contract/errors.ts';

/** What a job's thread answers: errors cross as records, since classes do not survive the message channel. */
export type ThreadAnswer = { readonly ok: true } | { readonly ok: false; readonly error: ErrorRecord };

/** Does a job in its thread; never throws. */
export async function answer(work: () => Promise<void>): Promise<ThreadAnswer> {
  try {
    await work();
    return { ok: true };
  } catch (error) {
    return { ok: false, error: BasinloomError.from(error).toRecord() };
  }
}
