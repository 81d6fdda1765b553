/** What the error table says of one error. */
export interface ErrorEntry {
  /** Process exit code when this error ends a run (see exit-codes.ts). */
  readonly exit: number;
  /** True when the same work may succeed later (a full disk, a lost connection). */
  readonly retryable: boolean;
  readonly message: string;
  readonly remedy: string;
}

/** A line of the table. */
export const entry = (exit: number, retryable: boolean, message: string, remedy: string): ErrorEntry => ({
  exit,
  retryable,
  message,
  remedy,
});
