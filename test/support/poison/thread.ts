import { existsSync } from 'node:fs';
import run from '../../../services/worker/thread.ts';

/** A worker thread whose process dies on a certain job, as long as a certain file is there. */
const { POISON_JOB, POISON_FILE } = process.env as { POISON_JOB: string; POISON_FILE: string };

export default async function poisoned(envelope: Parameters<typeof run>[0]): ReturnType<typeof run> {
  const { stage, id } = envelope.job;
  if (`${stage}/${id}` === POISON_JOB && existsSync(POISON_FILE)) process.kill(process.pid, 'SIGKILL');
  return run(envelope);
}
