import { ERROR_TABLE, type ErrorCode, type ErrorEntry } from './error-table.ts';

export type ErrorParameters = Readonly<Record<string, string | number>>;

/** What of an error crosses a thread, a queue or a file. */
export interface ErrorRecord {
  readonly code: ErrorCode;
  readonly message: string;
  readonly remedy: string;
  readonly retryable: boolean;
  readonly parameters: ErrorParameters;
}

const fill = (template: string, parameters: ErrorParameters): string =>
  template.replace(/\{(\w+)\}/g, (whole, name: string) => String(parameters[name] ?? whole));

/**
 * The one error class of the product. Message, remedy, exit code and retry rule come from the error table.
 *
 * @example throw new BasinloomError('RASTER_TRUNCATED', { file, place: 'block 12' }, { cause });
 */
export class BasinloomError extends Error {
  readonly code: ErrorCode;
  readonly parameters: ErrorParameters;

  constructor(code: ErrorCode, parameters: ErrorParameters = {}, options?: { cause?: unknown }) {
    super(fill(ERROR_TABLE[code].message, parameters), options);
    this.name = 'BasinloomError';
    this.code = code;
    this.parameters = parameters;
  }

  get entry(): ErrorEntry {
    return ERROR_TABLE[this.code];
  }

  get remedy(): string {
    return fill(this.entry.remedy, this.parameters);
  }

  get retryable(): boolean {
    return this.entry.retryable;
  }

  toRecord(): ErrorRecord {
    return {
      code: this.code,
      message: this.message,
      remedy: this.remedy,
      retryable: this.retryable,
      parameters: this.parameters,
    };
  }

  static fromRecord(record: ErrorRecord): BasinloomError {
    return new BasinloomError(record.code, record.parameters);
  }

  /** Any thrown value as an error of the table; what is not ours becomes INTERNAL with its cause kept. */
  static from(thrown: unknown): BasinloomError {
    if (thrown instanceof BasinloomError) return thrown;
    const detail = thrown instanceof Error ? thrown.message : String(thrown);
    return new BasinloomError('INTERNAL', { detail }, { cause: thrown });
  }
}
