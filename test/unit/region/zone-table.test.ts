import { describe, expect, it } from 'vitest';
import { ZoneAccumulator } from '../../../shared/region/zone-sum.ts';
import { ALL_CLASSES, BASIN_ZONE, ZONE_VARIABLES, type ZoneSum, ZoneTable } from '../../../shared/region/zone-table.ts';

const entry = (zone: number, landcover: number, value: number, longestGapMax = 0): ZoneSum => {
  const sums = new ZoneAccumulator();
  sums.addTile([value], -1, Float64Array.of(0.1));
  return {
    zone,
    landcover,
    longestGapMax,
    sums: Object.fromEntries(ZONE_VARIABLES.map((name) => [name, sums.toJSON()])) as ZoneSum['sums'],
  };
};

const tile1 = [entry(BASIN_ZONE, ALL_CLASSES, 3, 8), entry(1, ALL_CLASSES, 5, 20), entry(1, 82, 7)];
const tile2 = [entry(BASIN_ZONE, ALL_CLASSES, 11, 16), entry(0, ALL_CLASSES, 13), entry(1, 82, 17, 4)];

describe('zone table', () => {
  it('merges rows of the same zone and class, basin first', () => {
    const table = new ZoneTable();
    table.merge(tile1);
    table.merge(tile2);
    const rows = table.entries();
    expect(rows.map(({ zone, landcover, longestGapMax }) => [zone, landcover, longestGapMax])).toEqual([
      [BASIN_ZONE, ALL_CLASSES, 16],
      [0, ALL_CLASSES, 0],
      [1, ALL_CLASSES, 20],
      [1, 82, 4],
    ]);
    const { sum, touchedPixels } = ZoneAccumulator.fromJSON(rows[0].sums['et-before']);
    expect([sum, touchedPixels]).toEqual([0.1 * 3 + 0.1 * 11, 2]);
  });

  it('does not depend on the order, nor on merging in steps', () => {
    const table = (...parts: (readonly ZoneSum[])[]) => {
      const made = new ZoneTable();
      for (const part of parts) made.merge(part);
      return made.entries();
    };
    const forward = JSON.stringify(table(tile1, tile2, tile1));
    expect(JSON.stringify(table(tile2, tile1, tile1))).toBe(forward);
    expect(JSON.stringify(table(table(tile1, tile1), tile2))).toBe(forward);
  });
});
