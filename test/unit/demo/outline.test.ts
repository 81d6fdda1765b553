import { describe, expect, it } from 'vitest';
import { cellsAround, ringOfCells } from '../../../infra/demo/cell-grid.ts';
import { SCALES } from '../../../infra/demo/options.ts';
import { makeOutline, type Ring } from '../../../infra/demo/outline.ts';

/** Twice the signed area in square degrees: positive counter-clockwise. */
const twiceArea = (ring: Ring): number =>
  ring.slice(1).reduce((sum, [x, y], k) => sum + ring[k][0] * y - x * ring[k][1], 0);
const sides = (ring: Ring): string[] => ring.slice(1).map((point, k) => `${ring[k]} ${point}`);
const reversed = (side: string): string => side.split(' ').reverse().join(' ');

describe.each([1, 2, 11, 13])('the outline of seed %i', (seed) => {
  const { boundary, subBasins } = makeOutline(seed * 1000, SCALES.demo);

  it('has six sub-basins with closed, counter-clockwise rings', () => {
    expect(new Set(subBasins.map(({ name }) => name)).size).toBe(6);
    for (const ring of [boundary, ...subBasins.map((zone) => zone.ring)]) {
      expect(ring.at(-1)).toEqual(ring[0]);
      expect(twiceArea(ring)).toBeGreaterThan(0);
      expect(new Set(ring.map(String)).size).toBe(ring.length - 1);
    }
  });

  it('is tiled by them: every side belongs to two of them, or to one and the boundary', () => {
    const outer = new Set(sides(boundary));
    const all = subBasins.flatMap(({ ring }) => sides(ring));
    expect(new Set(all).size).toBe(all.length);
    const inner = all.filter((side) => !outer.has(side));
    expect(all.length - inner.length).toBe(outer.size);
    expect(inner.map(reversed).sort()).toEqual(inner.toSorted());
    const sum = subBasins.reduce((total, { ring }) => total + twiceArea(ring), 0);
    expect(sum).toBeCloseTo(twiceArea(boundary), 10);
  });

  it('covers the same cells as they do, each once', () => {
    const cells = cellsAround([boundary], 200);
    const whole = ringOfCells([boundary], cells);
    const count = new Int8Array(whole.length);
    for (const { ring } of subBasins) {
      for (const [at, index] of ringOfCells([ring], cells).entries()) count[at] += index + 1;
    }
    expect(count).toEqual(whole.map((index) => index + 1));
  });
});
