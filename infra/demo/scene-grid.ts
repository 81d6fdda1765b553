import proj4 from 'proj4';
import type { WorldScale } from './options.ts';
import { covers, type Swath } from './passes.ts';
import { toDegrees } from './plane.ts';

/** The raster of a scene: a Landsat-like UTM grid of 30 m whose pixel centres lie on whole multiples of 30 m. */
export interface SceneGrid {
  readonly epsg: number;
  readonly utmZone: number;
  /** Upper-left corner of the first pixel, m. */
  readonly left: number;
  readonly top: number;
  readonly width: number;
  readonly height: number;
}

export const PIXEL = 30;
/** Empty ground around the scene, pixels: the collar of fill that scenes come with. */
const COLLAR = 8;

export function utmProjection(zone: number) {
  return proj4(`+proj=utm +zone=${zone} +datum=WGS84 +units=m +no_defs`);
}

/** The smallest raster around what a row of a swath covers of the basin's neighbourhood. */
export function sceneGrid(swath: Swath, rowIndex: number, scale: WorldScale): SceneGrid {
  const { forward } = utmProjection(swath.utmZone);
  const halfWidth = scale.halfWidth + scale.margin;
  const halfHeight = scale.halfHeight + scale.margin;
  let [west, south, east, north] = [Infinity, Infinity, -Infinity, -Infinity];
  const parts = 160;
  for (let i = 0; i <= parts; i++) {
    for (let j = 0; j <= parts; j++) {
      const x = halfWidth * ((2 * i) / parts - 1);
      const y = halfHeight * ((2 * j) / parts - 1);
      if (!covers(swath, rowIndex, scale, x, y)) continue;
      const [e, n] = forward(toDegrees(x, y));
      west = Math.min(west, e);
      east = Math.max(east, e);
      south = Math.min(south, n);
      north = Math.max(north, n);
    }
  }
  const column = Math.floor(west / PIXEL) - COLLAR;
  const row = Math.ceil(north / PIXEL) + COLLAR;
  return {
    epsg: 32600 + swath.utmZone,
    utmZone: swath.utmZone,
    left: (column - 0.5) * PIXEL,
    top: (row + 0.5) * PIXEL,
    width: Math.ceil(east / PIXEL) + COLLAR - column,
    height: row - Math.floor(south / PIXEL) + COLLAR,
  };
}

/** Longitude and latitude of a point of the raster in pixels from its upper-left corner. */
export function gridPoint(grid: SceneGrid, column: number, row: number): [longitude: number, latitude: number] {
  const { inverse } = utmProjection(grid.utmZone);
  return inverse([grid.left + column * PIXEL, grid.top - row * PIXEL]) as [number, number];
}
