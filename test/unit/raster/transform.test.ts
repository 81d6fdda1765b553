import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { GridSpec } from '../../../shared/contract/grid.ts';
import type { RasterGeoreference } from '../../../shared/contract/scene.ts';
import { chooseStep, pixelTransform, transformError } from '../../../shared/raster/transform.ts';
import { projection } from '../../../shared/region/crs.ts';
import { sampleLattice } from '../../../shared/region/lattice.ts';
import { pixelToMap } from '../../../shared/region/pixel-place.ts';
import { arrayRaster, laeaGrid } from './array-raster.ts';

/** A whole basin: 300 km on a side. */
const basin: GridSpec = { ...laeaGrid, originX: -150_000, originY: 150_000, rows: 10_000, columns: 10_000 };
const utm: RasterGeoreference = arrayRaster(new Uint8Array(4), 2).header.georeference;
/** A coarse model field in degrees. */
const degrees: RasterGeoreference = {
  ...utm,
  proj4: '+proj=longlat +datum=WGS84 +no_defs',
  originX: 10,
  originY: 45,
  pixelWidth: 1 / 1200,
  pixelHeight: 1 / 1200,
};

function exactly(grid: GridSpec, target: RasterGeoreference, row: number, column: number): [number, number] {
  const [longitude, latitude] = projection(grid.crs).inverse(...pixelToMap(grid, row + 0.5, column + 0.5));
  const [x, y] = target.proj4.includes('longlat')
    ? [longitude, latitude]
    : projection(target).forward(longitude, latitude);
  return [(x - target.originX) / target.pixelWidth, (target.originY - y) / target.pixelHeight];
}

describe('from the grid to source pixels', () => {
  it.each([
    ['UTM, 30 m', utm],
    ['degrees, 3 seconds', degrees],
    ['a small pixel', { ...utm, pixelWidth: 1, pixelHeight: 1 }],
  ])('is within 1/8 source pixel at any pixel of a 300 km grid: %s', (_, target) => {
    let worst = 0;
    fc.assert(
      fc.property(fc.nat(basin.rows - 1), fc.nat(basin.columns - 1), (row, column) => {
        const lattice = pixelTransform(basin, target, { row, column, rows: 1, columns: 1 });
        const [x, y] = exactly(basin, target, row, column);
        const error = Math.hypot(
          sampleLattice(lattice, 0, row, column) - x,
          sampleLattice(lattice, 1, row, column) - y,
        );
        worst = Math.max(worst, error);
        expect(error).toBeLessThan(1 / 8);
      }),
      { seed: 5, numRuns: 400 },
    );
    expect(transformError(basin, target, chooseStep(basin, target))).toBeLessThan(1 / 8);
    // The probes must not miss what random pixels find.
    expect(worst).toBeLessThan(2 * transformError(basin, target, chooseStep(basin, target)) + 1e-6);
  });

  it('takes finer nodes where the map bends more, and the error falls with them', () => {
    expect(chooseStep(basin, utm)).toBe(64);
    const coarse: GridSpec = { ...basin, resolution: 1000, rows: 300, columns: 300 };
    const step = chooseStep(coarse, utm);
    expect(step).toBeLessThan(64);
    expect(transformError(coarse, utm, 2 * step)).toBeGreaterThan(1 / 16);
    expect(transformError(coarse, utm, 16)).toBeLessThan(transformError(coarse, utm, 32) / 2);
  });

  it('has a step that does not depend on the window or on an earlier call', () => {
    const first = chooseStep(basin, degrees);
    expect(chooseStep({ ...basin }, { ...degrees })).toBe(first);
    expect(pixelTransform(basin, degrees, { row: 5000, column: 1, rows: 9, columns: 9 }).step).toBe(first);
  });

  it('is exact where source and grid share a system', () => {
    const grid: GridSpec = {
      ...basin,
      crs: { code: 'x', proj4: utm.proj4, kind: 'epsg' },
      originX: 495015,
      originY: 4586985,
    };
    expect(transformError(grid, utm, 64)).toBe(0);
    const lattice = pixelTransform(grid, utm, { row: 70, column: 130, rows: 5, columns: 5 });
    expect(sampleLattice(lattice, 0, 72, 131)).toBe(131.5);
    expect(sampleLattice(lattice, 1, 72, 131)).toBe(72.5);
  });
});
