import { ERROR_TABLE, type ErrorEntry } from '../../shared/contract/error-table.ts';
import { code, page, table } from './markdown.ts';

/** docs/reference/errors.md: the error table. */
export function errorsPage(): string {
  const rows = (Object.entries(ERROR_TABLE) as [string, ErrorEntry][]).map(
    ([name, { exit, retryable, message, remedy }]) => [
      code(name),
      code(message),
      remedy,
      String(exit),
      retryable ? 'yes' : 'no',
    ],
  );
  return page('Errors', [
    'Every error has a code that does not change, a message that names the file and the place, and a remedy. Words in ' +
      'braces stand for what the message names. "Tried again" means that the same work may succeed later, so a job ' +
      'that fails with it is repeated before it is set aside. The exit code counts where the error ends the run; see ' +
      '[exit-codes.md](exit-codes.md).',
    'Errors in a tile, scene or pass do not end the run: they are listed in `failures.json` with the same codes.',
    table(['Code', 'Message', 'What to do', 'Exit code', 'Tried again'], rows),
  ]);
}
