import { EXIT } from '../../../shared/contract/exit-codes.ts';
import { openStore, placeOf } from '../../../shared/store/open-store.ts';
import { findFailures } from '../../coordinator/find-run.ts';
import { loadBasin } from '../../coordinator/load-basin.ts';
import { execute } from '../execute.ts';
import type { BasinOptions } from '../program.ts';

/** `basinloom run`. */
export async function run(file: string, options: BasinOptions & { readonly failed?: boolean }): Promise<number> {
  const basin = await loadBasin(file, options);
  if (options.failed) {
    const { failures, state } = await findFailures(openStore(basin.store));
    if (failures.length === 0 && state === 'complete') {
      process.stderr.write('nothing failed in the last run\n');
      return EXIT.ok;
    }
  }
  const { exitCode } = await execute(basin, {
    basinFile: file,
    log: options.log,
    ...(options.threads !== undefined && { threads: options.threads }),
  });
  if (exitCode === EXIT.ok || exitCode === EXIT.completeWithGaps) {
    process.stdout.write(`${placeOf(basin.store, 'report.html')}\n`);
  }
  return exitCode;
}
