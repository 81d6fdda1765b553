import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { GridSpec, TileAddress } from '../../shared/contract/grid.ts';
import type { LeftOut, PixelPolygons } from '../../shared/contract/plan.ts';
import type { PassRecord, RasterGeoreference, SceneRecord } from '../../shared/contract/scene.ts';
import { projection } from '../../shared/region/crs.ts';
import { mapToPixel } from '../../shared/region/pixel-place.ts';
import { tileId } from '../../shared/region/tiles.ts';
import { tilesTouching } from '../../shared/region/tiles-touching.ts';
import { findSuperseded, groupPasses } from '../../shared/scenes/passes.ts';
import { SCENE_SOURCES } from '../../shared/scenes/registry.ts';
import { addDays } from '../../shared/time/calendar.ts';

export interface SurveyedPass {
  readonly pass: PassRecord;
  readonly tiles: readonly number[];
  readonly sceneTiles: readonly (readonly number[])[];
}

export interface Survey {
  readonly passes: readonly SurveyedPass[];
  readonly leftOut: readonly LeftOut[];
}

/**
 * Finds the scenes of the basin file, keeps those that touch the region within reach of the period, and groups
 * them into passes. Reads metadata and file headers only. A scene that cannot be used is left out with its reason.
 *
 * @throws BasinloomError SCENES_NONE when a source holds no scene at all
 */
export async function survey(
  basin: BasinFile,
  grid: GridSpec,
  tiles: readonly TileAddress[],
  solarOffsetHours: number,
  signal?: AbortSignal,
): Promise<Survey> {
  const leftOut: LeftOut[] = [];
  const scenes: SceneRecord[] = [];
  for (const source of basin.scenes) {
    const found = await SCENE_SOURCES[source.source].find(source.path, signal);
    if (found.length === 0) throw new BasinloomError('SCENES_NONE', { path: source.path });
    for (const entry of found) {
      if ('scene' in entry) scenes.push(entry.scene);
      else leftOut.push({ kind: 'scene', id: entry.id, gap: true, error: entry.problem.toRecord() });
    }
  }
  const reach = basin.integrate.maxGapDays;
  const first = addDays(basin.period.from, -reach);
  const last = addDays(basin.period.to, reach);
  const tileIndex = new Map(tiles.map((tile, index) => [tileId(tile), index]));
  const touching = new Map<SceneRecord, readonly number[]>();
  for (const scene of scenes) {
    const touched = tilesTouching(grid, footprint(scene.georeference, grid))
      .flatMap((tile) => tileIndex.get(tileId(tile)) ?? [])
      .sort((a, b) => a - b);
    if (touched.length > 0) touching.set(scene, touched);
    else {
      const error = new BasinloomError('SCENE_OUTSIDE', { scene: scene.id }).toRecord();
      leftOut.push({ kind: 'scene', id: scene.id, gap: false, error });
    }
  }
  for (const { scene, by } of findSuperseded([...touching.keys()])) {
    const error = new BasinloomError('SCENE_SUPERSEDED', { scene: scene.id, by: by.id }).toRecord();
    leftOut.push({ kind: 'scene', id: scene.id, gap: false, error });
  }
  const passes = groupPasses([...touching.keys()], solarOffsetHours)
    .filter(({ date }) => date >= first && date <= last)
    .map((pass) => {
      const sceneTiles = pass.scenes.map((scene) => touching.get(scene) ?? []);
      return { pass, sceneTiles, tiles: [...new Set(sceneTiles.flat())].sort((a, b) => a - b) };
    });
  return { passes, leftOut };
}

/** Points along each side of a scene when its outline is put on the grid: meridians and parallels bend. */
const SIDE_POINTS = 16;

/** Outline of a raster in global pixel coordinates. */
function footprint(raster: RasterGeoreference, grid: GridSpec): PixelPolygons {
  const from = projection(raster);
  const to = projection(grid.crs);
  const corners = [
    [0, 0],
    [raster.width, 0],
    [raster.width, raster.height],
    [0, raster.height],
  ] as const;
  const ring = corners.flatMap(([x0, y0], corner) => {
    const [x1, y1] = corners[(corner + 1) % 4];
    return Array.from({ length: SIDE_POINTS }, (_, k): [number, number] => {
      const share = k / SIDE_POINTS;
      const x = raster.originX + (x0 + (x1 - x0) * share) * raster.pixelWidth;
      const y = raster.originY - (y0 + (y1 - y0) * share) * raster.pixelHeight;
      const [lon, lat] = from.inverse(x, y);
      const { row, column } = mapToPixel(grid, ...to.forward(lon, lat));
      return [column, row];
    });
  });
  return [[[...ring, ring[0]]]];
}
