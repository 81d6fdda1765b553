import { stringify } from 'csv-stringify/sync';

/** One column of a table: its name carries the unit; `value` gives the text of a cell, or what to write. */
export interface Column<Row> {
  readonly name: string;
  readonly value: (row: Row) => string | number | boolean | null | undefined;
  /** Decimals of a number; a whole number when absent. */
  readonly decimals?: number;
}

/**
 * A table as RFC 4180 text: header line, CRLF line ends, quotes where needed. A missing value (undefined, null,
 * NaN, infinite) is an empty cell. Numbers have a fixed count of decimals, a point and no grouping, so that the
 * same rows give the same bytes on every machine.
 */
export function csvText<Row>(columns: readonly Column<Row>[], rows: readonly Row[]): string {
  const records = rows.map((row) => columns.map(({ value, decimals }) => cell(value(row), decimals)));
  return stringify([columns.map(({ name }) => name), ...records], { record_delimiter: 'windows' });
}

function cell(value: string | number | boolean | null | undefined, decimals = 0): string {
  if (value === undefined || value === null) return '';
  return typeof value === 'number' ? fixedNumber(value, decimals) : String(value);
}

/** A number with a fixed count of decimals; never "-0"; empty when not finite. */
export function fixedNumber(value: number, decimals: number): string {
  if (!Number.isFinite(value)) return '';
  const text = value.toFixed(decimals);
  return /^-0(\.0*)?$/.test(text) ? text.slice(1) : text;
}
