import { EXIT } from '../../../shared/contract/exit-codes.ts';
import type { LeftOut } from '../../../shared/contract/plan.ts';
import { openStore } from '../../../shared/store/open-store.ts';
import { findFailures } from '../../coordinator/find-run.ts';

/** `basinloom failures`. */
export async function failures(
  out: string,
  options: { readonly run?: string; readonly json?: boolean },
): Promise<number> {
  const record = await findFailures(openStore(out), options.run);
  if (options.json) {
    process.stdout.write(`${JSON.stringify(record, null, 2)}\n`);
    return EXIT.ok;
  }
  const lines = [`run ${record.run}, ${record.state}`];
  if (record.failures.length === 0) lines.push('nothing was set aside that the products lack');
  else lines.push(`${record.failures.length} set aside:`, ...record.failures.flatMap(describe));
  if (record.notes.length > 0)
    lines.push(`${record.notes.length} left out, no gap:`, ...record.notes.flatMap(describe));
  if (record.failures.length > 0) lines.push('', 'When the causes are gone: basinloom run <basin.yaml> --failed');
  process.stdout.write(`${lines.join('\n')}\n`);
  return EXIT.ok;
}

const describe = ({ kind, id, error }: LeftOut) => [
  `  ${kind} ${id}`,
  `    ${error.code}: ${error.message}`,
  `    ${error.remedy}`,
];
