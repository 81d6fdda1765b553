import { hostname } from 'node:os';
import { EXIT } from '../../../shared/contract/exit-codes.ts';
import { openStore } from '../../../shared/store/open-store.ts';
import { isAlive } from '../../../shared/store/process-alive.ts';
import { findRun } from '../../coordinator/find-run.ts';
import type { RunRecord } from '../../coordinator/run-record.ts';

/** `basinloom status`. */
export async function status(
  out: string,
  options: { readonly run?: string; readonly json?: boolean },
): Promise<number> {
  const record = await findRun(openStore(out), options.run);
  if (options.json) {
    process.stdout.write(`${JSON.stringify(record, null, 2)}\n`);
    return EXIT.ok;
  }
  const lines = [
    `run      ${record.id}`,
    `basin    ${record.basin} (${record.basinFile})`,
    `state    ${record.state}${isGone(record) ? ' (its process is gone; run it again to go on)' : ''}`,
    `started  ${record.started}`,
    `updated  ${record.updated}`,
  ];
  for (const [name, counts] of Object.entries(record.stages)) {
    const { total, done, kept, setAside } = counts;
    lines.push(
      `  ${name.padEnd(10)} ${done + kept + setAside}/${total}  done ${done}  kept ${kept}  set aside ${setAside}`,
    );
  }
  if (record.leftOut > 0) lines.push(`left out or set aside: ${record.leftOut}; see basinloom failures ${out}`);
  if (record.error) lines.push(`error    ${record.error.message}`, `         ${record.error.remedy}`);
  process.stdout.write(`${lines.join('\n')}\n`);
  return EXIT.ok;
}

/** Only a process of this machine can be looked for. */
function isGone({ state, host, process }: RunRecord): boolean {
  return state === 'running' && host === hostname() && !isAlive(process);
}
