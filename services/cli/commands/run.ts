import { join } from 'node:path';
import { EXIT } from '../../../shared/contract/exit-codes.ts';
import { loadBasin } from '../../coordinator/load-basin.ts';
import { execute } from '../execute.ts';
import type { BasinOptions } from '../program.ts';

/** `basinloom run`. */
export async function run(file: string, options: BasinOptions): Promise<number> {
  const basin = await loadBasin(file, options);
  const { exitCode } = await execute(basin, {
    basinFile: file,
    log: options.log,
    ...(options.threads !== undefined && { threads: options.threads }),
  });
  if (exitCode === EXIT.ok || exitCode === EXIT.completeWithGaps) {
    process.stdout.write(`${join(basin.store, 'report.html')}\n`);
  }
  return exitCode;
}
