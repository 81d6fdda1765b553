import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PixelWindow } from '../../../shared/contract/grid.ts';
import type { PixelPolygons } from '../../../shared/contract/plan.ts';
import { indexEdges, polygonCoverage } from '../../../shared/region/coverage.ts';
import { snap } from '../../../shared/region/snapped-edge.ts';
import { closed, rectangle, shoelace, starRing } from './shapes.ts';

const WHOLE: PixelWindow = { row: 0, column: 0, rows: 40, columns: 40 };
const shares = (polygons: PixelPolygons, window = WHOLE) => polygonCoverage(indexEdges(polygons), window).share;
const total = (values: Float64Array) => values.reduce((sum, value) => sum + value, 0);
const snapped = (polygons: PixelPolygons): PixelPolygons =>
  polygons.map((polygon) => polygon.map((ring) => ring.map(([x, y]) => [snap(x), snap(y)] as const)));

describe('share of simple shapes', () => {
  it('gives the exact shares of a rectangle', () => {
    const share = shares(rectangle(0.25, 0.5, 2.5, 2), { row: 0, column: 0, rows: 3, columns: 4 });
    expect([...share]).toEqual([0.375, 0.5, 0.25, 0, 0.75, 1, 0.5, 0, 0, 0, 0, 0]);
  });

  it('gives the exact shares of a triangle', () => {
    // Below the diagonal of a 2 x 2 block: half pixels on it.
    const share = shares([[closed([0, 0], [0, 2], [2, 2])]], { row: 0, column: 0, rows: 2, columns: 2 });
    expect([...share]).toEqual([0.5, 0, 1, 0.5]);
  });

  it('gives the shares of a slant side from geometry', () => {
    // x from 0 at the top to 4 at the bottom of one row: column c keeps the part right of the line, (2 c + 1) / 8.
    const share = shares([[closed([0, 0], [4, 1], [4, 0])]], { row: 0, column: 0, rows: 1, columns: 4 });
    expect([...share]).toEqual([0.125, 0.375, 0.625, 0.875]);
  });

  it('leaves holes out, by their orientation', () => {
    const holed = [[closed([0, 0], [0, 4], [4, 4], [4, 0]), closed([1, 1], [3, 1], [3, 3], [1, 3])]];
    const share = shares(holed, { row: 0, column: 0, rows: 4, columns: 4 });
    expect([...share]).toEqual([1, 1, 1, 1, 1, 0, 0, 1, 1, 0, 0, 1, 1, 1, 1, 1]);
  });

  it('does not mind which way round a polygon runs', () => {
    const forward = [[closed([0.3, 0.2], [2.8, 3.1], [3.7, 0.4])]];
    const backward = forward.map((polygon) => polygon.map((ring) => ring.toReversed()));
    expect(shares(backward)).toEqual(shares(forward));
  });

  it('never counts a stray hole as inside', () => {
    const stray = [[closed([0, 0], [0, 4], [4, 4], [4, 0]), closed([6, 1], [8, 1], [8, 3], [6, 3])]];
    expect(total(shares(stray))).toBe(16);
  });

  it('counts an overlap once', () => {
    const overlapping = [...rectangle(0, 0, 4, 4), ...rectangle(2, 0, 6, 4)];
    expect(total(shares(overlapping))).toBe(24);
  });

  it('reports windows without a share as empty', () => {
    const index = indexEdges(rectangle(2, 2, 5, 5));
    const at = (row: number, column: number) => polygonCoverage(index, { row, column, rows: 2, columns: 2 }).empty;
    expect([at(0, 2), at(2, 0), at(5, 2), at(2, 5), at(2, 2), at(4, 4)]).toEqual([
      true,
      true,
      true,
      true,
      false,
      false,
    ]);
    expect(polygonCoverage(indexEdges([]), WHOLE).empty).toBe(true);
  });

  it('counts a polygon that reaches far outside the window on every side', () => {
    const index = indexEdges([[closed([-1e6, -1e6], [-1e6, 1e6], [1e6, 1e6], [1e6, -1e6])]]);
    expect(new Set(polygonCoverage(index, { row: -3, column: -5, rows: 7, columns: 9 }).share)).toEqual(new Set([1]));
  });
});

describe('properties', () => {
  it('is the same, bit for bit, in any window', () => {
    const window = fc.record({
      row: fc.integer({ min: -5, max: 42 }),
      column: fc.integer({ min: -5, max: 42 }),
      rows: fc.integer({ min: 1, max: 20 }),
      columns: fc.integer({ min: 1, max: 20 }),
    });
    fc.assert(
      fc.property(starRing, window, (ring, part) => {
        const index = indexEdges([[ring]]);
        const wide = { row: -10, column: -10, rows: 80, columns: 80 };
        const whole = polygonCoverage(index, wide).share;
        const { share, empty } = polygonCoverage(index, part);
        const crop = Float64Array.from(share, (_, i) => {
          const row = part.row + Math.floor(i / part.columns) - wide.row;
          return whole[row * wide.columns + part.column + (i % part.columns) - wide.column];
        });
        expect(share).toEqual(crop);
        expect(empty).toBe(!crop.some((value) => value > 0));
      }),
    );
  });

  it('adds up to the area of the polygon', () => {
    fc.assert(
      fc.property(starRing, (ring) => {
        const area = shoelace(snapped([[ring]]));
        expect(Math.abs(total(shares([[ring]])) - area)).toBeLessThanOrEqual(1e-9 * area);
      }),
    );
  });

  it('is exactly 1 inside, exactly 0 outside, and between them only along the outline', () => {
    fc.assert(
      fc.property(starRing, (ring) => {
        const share = shares([[ring]]);
        const near = outlinePixels(snapped([[ring]])[0][0]);
        for (let i = 0; i < share.length; i++) if (!near.has(i)) expect([0, 1]).toContain(share[i]);
      }),
    );
  });

  it('adds up to 1 over neighbours with common vertices', () => {
    // A square of 40 pixels, cut from top to bottom by a crooked line, and the right part cut once more.
    const cut = fc.array(fc.double({ min: 2, max: 18, noNaN: true }), { minLength: 1, maxLength: 12 });
    fc.assert(
      fc.property(cut, fc.double({ min: 3, max: 37, noNaN: true }), (xs, y) => {
        const line = [-1, ...xs, -1].map((x, k) => [x < 0 ? 10 : x, (40 * k) / (xs.length + 1)] as const);
        const left = [[closed([0, 0], [0, 40], ...line.toReversed())]];
        const upper = [[closed([20, 0], [20, y], [40, y - 2], [40, 0])]];
        const lower = [[closed([20, y], [20, 40], [40, 40], [40, y - 2])]];
        const middle = [[closed(...line, [20, 40], [20, y], [20, 0])]];
        const zones = [left, upper, lower, middle].map((zone) => shares(zone));
        for (let i = 0; i < 1600; i++) {
          expect(Math.abs(zones.reduce((sum, zone) => sum + zone[i], 0) - 1)).toBeLessThanOrEqual(1e-12);
        }
      }),
    );
  });

  it('leaves a sliver of less than the snapping where only one neighbour has a vertex', () => {
    const left = shares([[closed([0, 0], [0, 40], [7.3, 40], [3.1, 0])]]);
    const t: [number, number] = [3.1 + (4.2 * 13) / 40, 13];
    const right = shares([[closed([3.1, 0], t, [7.3, 40], [40, 40], [40, 0])]]);
    const worst = left.reduce((most, value, i) => Math.max(most, Math.abs(value + right[i] - 1)), 0);
    expect(worst).toBeGreaterThan(0);
    expect(worst).toBeLessThan(2 ** -16);
  });
});

/** Pixels whose closed square comes near a side of the ring: found by fine steps, with one pixel to spare. */
function outlinePixels(ring: readonly (readonly [number, number])[]): Set<number> {
  const found = new Set<number>();
  for (let i = 1; i < ring.length; i++) {
    for (let k = 0; k <= 200; k++) {
      const x = ring[i - 1][0] + ((ring[i][0] - ring[i - 1][0]) * k) / 200;
      const y = ring[i - 1][1] + ((ring[i][1] - ring[i - 1][1]) * k) / 200;
      for (const dr of [-0.3, 0.3]) {
        for (const dc of [-0.3, 0.3]) found.add(Math.floor(y + dr) * 40 + Math.floor(x + dc));
      }
    }
  }
  return found;
}
