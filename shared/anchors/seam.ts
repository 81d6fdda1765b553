import { BasinloomError } from '../contract/errors.ts';
import type { PixelWindow } from '../contract/grid.ts';
import { type EdgeStrip, type OriginPlane, STRIP_LINES, stripOrigins } from './edge-strips.ts';
import { clusterOf, SeamStats, type SeamStatsJson } from './seam-stats.ts';

export type { Estimate } from './cluster-moments.ts';
export { type EdgeStrip, type EdgeStrips, takeEdges } from './edge-strips.ts';
export { clusterOf, type SeamResult, SeamStats, type SeamStatsJson } from './seam-stats.ts';

/** The seam between two origins, a < b. */
export interface SeamEntry {
  readonly a: number;
  readonly b: number;
  readonly stats: SeamStatsJson;
}

/** Seams by their pair of origins. */
export class SeamTable {
  readonly #seams = new Map<string, { readonly a: number; readonly b: number; readonly stats: SeamStats }>();
  #latest?: { readonly a: number; readonly b: number; readonly stats: SeamStats };

  /** Statistics of the seam between two origins, a < b; made when absent. */
  seam(a: number, b: number): SeamStats {
    // pairs come in long runs of the same seam
    if (this.#latest?.a === a && this.#latest.b === b) return this.#latest.stats;
    const key = `${a}:${b}`;
    const found = this.#seams.get(key) ?? { a, b, stats: new SeamStats() };
    this.#seams.set(key, found);
    this.#latest = found;
    return found.stats;
  }

  merge(entries: readonly SeamEntry[]): void {
    for (const { a, b, stats } of entries) this.seam(a, b).merge(SeamStats.fromJSON(stats));
  }

  /** All seams, ordered by a, then b. */
  entries(): SeamEntry[] {
    return [...this.#seams.values()]
      .sort((x, y) => x.a - y.a || x.b - y.b)
      .map(({ a, b, stats }) => ({ a, b, stats: stats.toJSON() }));
  }
}

/**
 * Seams inside one tile: all adjacent pixel pairs, along rows and along columns, whose origins differ and whose
 * outer neighbours in line have the same origin as their side, all four valid. Runs that reach over the tile's
 * edge are left to `crossEdge`: over a whole grid the two together count every run once, whatever the tiling.
 *
 * @param plane stored values; `nodata` marks those without one
 * @param origin where each value comes from: an id of a scene or pass
 * @param window where the tile lies on the grid
 */
export function scanSeams(plane: Int16Array, nodata: number, origin: OriginPlane, window: PixelWindow): SeamEntry[] {
  const { rows, columns } = window;
  const table = new SeamTable();
  const scan = (at: number, stride: number, row: number, column: number) => {
    if (origin[at] === origin[at + stride]) return;
    addRun(plane, nodata, origin, at, stride, clusterOf(window.row + row, window.column + column), table);
  };
  for (let row = 0; row < rows; row += 1) {
    for (let column = 1; column < columns - 2; column += 1) scan(row * columns + column, 1, row, column);
  }
  for (let row = 1; row < rows - 2; row += 1) {
    for (let column = 0; column < columns; column += 1) scan(row * columns + column, columns, row, column);
  }
  return table.entries();
}

/**
 * Runs that straddle the edge between two tiles: the bottom strip of the upper tile and the top strip of the
 * lower one, or the right strip of the left tile and the left strip of the right one.
 *
 * Where origins differ inside the run, it counts for that seam in `table`. Where all four pixels have one
 * origin and the edge lies in the middle, it counts for `tileEdge`: a jump that only the tiling could cause.
 *
 * @throws INTERNAL when the strips do not belong together.
 */
export function crossEdge(
  first: EdgeStrip,
  second: EdgeStrip,
  nodata: number,
  table: SeamTable,
  tileEdge: SeamStats,
): void {
  requireNeighbours(first, second);
  if (first.values.length === 0 || second.values.length === 0) return;
  const { length } = first;
  const plane = Int16Array.from([...first.values, ...second.values]);
  const origin = new Uint32Array(plane.length);
  origin.set(stripOrigins(first));
  origin.set(stripOrigins(second), first.values.length);
  const edge = new SeamStats();
  // x1 in the last but one line of the first tile, in its last line, and in the first line of the second tile
  for (let line = STRIP_LINES - 2; line <= STRIP_LINES; line += 1) {
    for (let i = 0; i < length; i += 1) {
      const at = line * length + i;
      const crosses = origin[at] !== origin[at + length];
      if (!crosses && line !== STRIP_LINES - 1) continue;
      const [row, column] = first.along === 'row' ? [line, i] : [i, line];
      const cluster = clusterOf(first.row + row, first.column + column);
      addRun(plane, nodata, origin, at, length, cluster, crosses ? table : edge);
    }
  }
  edge.close();
  tileEdge.merge(edge);
}

function requireNeighbours(first: EdgeStrip, second: EdgeStrip): void {
  const [down, right] = first.along === 'row' ? [STRIP_LINES, 0] : [0, STRIP_LINES];
  const fit =
    first.along === second.along &&
    first.length === second.length &&
    first.row + down === second.row &&
    first.column + right === second.column;
  if (!fit) throw new BasinloomError('INTERNAL', { detail: 'edge strips of tiles that do not meet' });
}

/** Adds the run with x1 at index `at` and its pixels `stride` apart, if it is valid and of one origin per side. */
function addRun(
  plane: Int16Array,
  nodata: number,
  origin: OriginPlane,
  at: number,
  stride: number,
  cluster: number,
  to: SeamTable | SeamStats,
): void {
  const x0 = plane[at - stride];
  const x1 = plane[at];
  const x2 = plane[at + stride];
  const x3 = plane[at + 2 * stride];
  if (x0 === nodata || x1 === nodata || x2 === nodata || x3 === nodata) return;
  const a = origin[at];
  const b = origin[at + stride];
  if (origin[at - stride] !== a || origin[at + 2 * stride] !== b) return;
  if (to instanceof SeamStats) to.add(x0, x1, x2, x3, cluster);
  else if (a < b) to.seam(a, b).add(x0, x1, x2, x3, cluster);
  else to.seam(b, a).add(x0, x1, x2, x3, cluster, -1);
}
