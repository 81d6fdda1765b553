import { BasinloomError } from '../../shared/contract/errors.ts';

/** Says on stderr what went wrong and what to do about it. @returns the exit code */
export function printError(thrown: unknown): number {
  const error = BasinloomError.from(thrown);
  const more = error.cause instanceof AggregateError ? (error.cause.errors as Error[]) : [];
  process.stderr.write(`basinloom: ${error.message}\n`);
  for (const other of more) process.stderr.write(`basinloom: ${other.message}\n`);
  process.stderr.write(`  ${error.remedy}\n`);
  if (error.code === 'INTERNAL' && error.cause instanceof Error && error.cause.stack) {
    process.stderr.write(`${error.cause.stack}\n`);
  }
  return error.entry.exit;
}
