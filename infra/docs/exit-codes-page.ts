import { EXIT, EXIT_MEANING } from '../../shared/contract/exit-codes.ts';
import { code, page, table } from './markdown.ts';

/** docs/reference/exit-codes.md. */
export function exitCodesPage(): string {
  const codes = Object.values(EXIT).sort((a, b) => a - b);
  return page('Exit codes', [
    'What `basinloom` returns to the shell. Numbers from 64 to 78 follow sysexits(3).',
    table(
      ['Exit code', 'Meaning'],
      codes.map((exit) => [code(String(exit)), EXIT_MEANING[exit]]),
    ),
  ]);
}
