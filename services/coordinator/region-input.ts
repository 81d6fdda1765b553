import { readFile } from 'node:fs/promises';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { GridSpec } from '../../shared/contract/grid.ts';
import type { PixelPolygons, PlannedZone } from '../../shared/contract/plan.ts';
import { type Boundary, parseBoundary, parseZones } from '../../shared/region/boundary.ts';
import { makeGrid, projectPolygons } from '../../shared/region/grid.ts';
import { resolveCrs } from '../../shared/region/resolve-crs.ts';

export interface RegionInput {
  readonly boundary: Boundary;
  readonly grid: GridSpec;
  readonly boundaryPixels: PixelPolygons;
  readonly zones: readonly PlannedZone[];
}

/** Boundary and zones of the basin file on the grid. Paths are absolute. */
export async function readRegion(basin: BasinFile): Promise<RegionInput> {
  const { region, grid: wanted } = basin;
  const boundary = parseBoundary(await readText(region.boundary), region.boundary);
  const crs = await resolveCrs(wanted.crs, boundary);
  const grid = makeGrid(boundary, crs, wanted.resolution, wanted.tile);
  const zones = region.zones ? parseZones(await readText(region.zones), region.zones, region.zoneName) : [];
  return {
    boundary,
    grid,
    boundaryPixels: projectPolygons(boundary.polygons, crs, grid),
    zones: zones.map(({ name, polygons }) => ({ name, polygons: projectPolygons(polygons, crs, grid) })),
  };
}

async function readText(file: string): Promise<string> {
  try {
    return await readFile(file, 'utf8');
  } catch (error) {
    throw new BasinloomError('BOUNDARY_MISSING', { file }, { cause: error });
  }
}
