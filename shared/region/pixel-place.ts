import type { GridSpec } from '../contract/grid.ts';
import { projection } from './crs.ts';

/** Map coordinates (m) of a global pixel coordinate; (0.5, 0.5) is the centre of the first pixel. */
export function pixelToMap(grid: GridSpec, row: number, column: number): [x: number, y: number] {
  return [grid.originX + column * grid.resolution, grid.originY - row * grid.resolution];
}

/** Global pixel coordinates of a map point. */
export function mapToPixel(grid: GridSpec, x: number, y: number): { row: number; column: number } {
  return { row: (grid.originY - y) / grid.resolution, column: (x - grid.originX) / grid.resolution };
}

/** WGS 84 longitude and latitude (degrees) of a global pixel coordinate. */
export function pixelToLonLat(grid: GridSpec, row: number, column: number): [longitude: number, latitude: number] {
  return projection(grid.crs).inverse(...pixelToMap(grid, row, column));
}
