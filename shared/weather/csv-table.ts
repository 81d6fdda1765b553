import { readFile } from 'node:fs/promises';
import { CsvError, parse } from 'csv-parse/sync';
import { distance } from 'fastest-levenshtein';
import { BasinloomError } from '../contract/errors.ts';
import type { Column } from './columns.ts';

export interface CsvRow {
  /** Line of the file on which the row ends, 1 for the first. */
  readonly line: number;
  readonly cells: readonly string[];
}

const NUMBER = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;

/**
 * A CSV file (RFC 4180) with a header row, as text cells that remember their line. Blank lines and lines that begin
 * with "#" are skipped.
 */
export class CsvTable {
  readonly file: string;
  readonly rows: readonly CsvRow[];
  readonly #header: readonly string[];

  private constructor(file: string, header: readonly string[], rows: readonly CsvRow[]) {
    this.file = file;
    this.rows = rows;
    this.#header = header;
  }

  /** @throws BasinloomError WEATHER_FILE when the file cannot be read or is no table */
  static async read(file: string): Promise<CsvTable> {
    const text = await readFile(file, 'utf8').catch((cause) => {
      throw fileFault(file, 1, `cannot be read: ${messageOf(cause)}`, cause);
    });
    const [header, ...rows] = parseRows(file, text);
    if (!header) throw fileFault(file, 1, 'the file is empty');
    const repeated = header.cells.find((name, k) => header.cells.indexOf(name) < k);
    if (repeated !== undefined) throw fileFault(file, header.line, `column "${repeated}" stands twice`);
    return new CsvTable(file, header.cells, rows);
  }

  has(name: string): boolean {
    return this.#header.includes(name);
  }

  /** @throws BasinloomError WEATHER_COLUMN, with the header's most similar name */
  require(name: string): void {
    if (this.has(name)) return;
    const similar = this.similarTo(name);
    const suggestion = similar === undefined ? '' : `; is "${similar}" meant to be it?`;
    throw new BasinloomError('WEATHER_COLUMN', { file: this.file, column: name, suggestion });
  }

  /** The header's name that is probably a misspelling of the one given. */
  similarTo(name: string): string | undefined {
    const slips = (candidate: string) => distance(candidate.toLowerCase(), name);
    const best = this.#header.toSorted((a, b) => slips(a) - slips(b)).at(0);
    return best !== undefined && slips(best) <= Math.max(2, Math.floor(name.length / 3)) ? best : undefined;
  }

  /** Text of a cell; empty where the column is not in the file. */
  text(row: CsvRow, name: string): string {
    const at = this.#header.indexOf(name);
    return at < 0 ? '' : row.cells[at];
  }

  /**
   * Value of a cell, NaN where it is empty or the column is not in the file.
   *
   * @throws BasinloomError WEATHER_FILE when it is no number or outside the column's range
   */
  number(row: CsvRow, { name, low, high }: Column): number {
    const text = this.text(row, name);
    if (text === '') return Number.NaN;
    const value = NUMBER.test(text) ? Number(text) : Number.NaN;
    if (value >= low && value <= high) return value;
    const what = Number.isNaN(value) ? `"${text}" is not a number` : `${text} is outside ${low} to ${high}`;
    throw this.fault(row.line, `${name}: ${what}; leave the cell of a missing value empty`);
  }

  fault(line: number, detail: string, cause?: unknown): BasinloomError {
    return fileFault(this.file, line, detail, cause);
  }
}

function parseRows(file: string, text: string): CsvRow[] {
  const options = { bom: true, trim: true, info: true, skip_empty_lines: true, comment: '#', comment_no_infix: true };
  try {
    const parsed = parse(text, options) as unknown as { record: string[]; info: { lines: number } }[];
    return parsed.map(({ record, info }) => ({ line: info.lines, cells: record }));
  } catch (cause) {
    const line = cause instanceof CsvError && typeof cause.lines === 'number' ? cause.lines : 1;
    throw fileFault(file, line, messageOf(cause), cause);
  }
}

function fileFault(file: string, line: number, detail: string, cause?: unknown): BasinloomError {
  return new BasinloomError('WEATHER_FILE', { file, line, detail }, { cause });
}

function messageOf(thrown: unknown): string {
  return thrown instanceof Error ? thrown.message : String(thrown);
}
