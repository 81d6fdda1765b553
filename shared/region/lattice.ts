import type { PixelWindow } from '../contract/grid.ts';

/**
 * A sparse net of nodes at whole multiples of `step` in global pixel coordinates, with bilinear values between.
 * Because nodes and cells are global, a pixel's value is the same in whatever window it is asked for: this is
 * what keeps smooth fields (weather, sun, map transforms) free of tile edges.
 */
export interface Lattice {
  /** Node spacing, pixels. */
  readonly step: number;
  /** Index of the first node row and column: node (i, j) lies at global pixel corner (i * step, j * step). */
  readonly nodeRow: number;
  readonly nodeColumn: number;
  readonly nodeRows: number;
  readonly nodeColumns: number;
  /** One array of nodeRows * nodeColumns values for each variable, row by row. */
  readonly values: readonly Float64Array[];
}

/** Node spacing of the smooth fields, pixels. The same for all who ask: an anchor sees the values of its flux tile. */
export const FIELD_STEP = 64;

/**
 * Evaluates `evaluate` at every node that the window's cells need.
 *
 * @param evaluate gets global pixel coordinates (row, column; 0.5 is the centre of the first pixel) and fills `out`
 */
export function buildLattice(
  window: PixelWindow,
  step: number,
  variables: number,
  evaluate: (row: number, column: number, out: Float64Array) => void,
): Lattice {
  const nodeRow = Math.floor(window.row / step);
  const nodeColumn = Math.floor(window.column / step);
  const nodeRows = Math.floor((window.row + window.rows - 1) / step) - nodeRow + 2;
  const nodeColumns = Math.floor((window.column + window.columns - 1) / step) - nodeColumn + 2;
  const values = Array.from({ length: variables }, () => new Float64Array(nodeRows * nodeColumns));
  const out = new Float64Array(variables);
  for (let i = 0; i < nodeRows; i++) {
    for (let j = 0; j < nodeColumns; j++) {
      evaluate((nodeRow + i) * step, (nodeColumn + j) * step, out);
      for (let v = 0; v < variables; v++) values[v][i * nodeColumns + j] = out[v];
    }
  }
  return { step, nodeRow, nodeColumn, nodeRows, nodeColumns, values };
}

/** Values of one variable at the pixel centres of part of a global row. `out` holds at least `columns` values. */
export function expandRow(
  lattice: Lattice,
  variable: number,
  row: number,
  column: number,
  columns: number,
  out: Float32Array | Float64Array,
  offset = 0,
): void {
  const { step, nodeColumns } = lattice;
  const nodes = lattice.values[variable];
  const i = Math.floor(row / step);
  const fy = (row + 0.5 - i * step) / step;
  const top = (i - lattice.nodeRow) * nodeColumns - lattice.nodeColumn;
  const bottom = top + nodeColumns;
  const end = column + columns;
  for (let cell = column; cell < end; ) {
    const j = Math.floor(cell / step);
    const cellEnd = Math.min(end, (j + 1) * step);
    const left = nodes[top + j] + (nodes[bottom + j] - nodes[top + j]) * fy;
    const right = nodes[top + j + 1] + (nodes[bottom + j + 1] - nodes[top + j + 1]) * fy;
    for (; cell < cellEnd; cell++) {
      const fx = (cell + 0.5 - j * step) / step;
      out[offset + cell - column] = left + (right - left) * fx;
    }
  }
}

/** Values of one variable at every pixel centre of the window, row by row, into `out`. */
export function expandLattice(
  lattice: Lattice,
  variable: number,
  window: PixelWindow,
  out: Float32Array | Float64Array,
): void {
  for (let r = 0; r < window.rows; r++) {
    expandRow(lattice, variable, window.row + r, window.column, window.columns, out, r * window.columns);
  }
}

/** Value of one variable at the centre of one global pixel. The lattice must cover it. */
export function sampleLattice(lattice: Lattice, variable: number, row: number, column: number): number {
  const one = new Float64Array(1);
  expandRow(lattice, variable, row, column, 1, one);
  return one[0];
}
