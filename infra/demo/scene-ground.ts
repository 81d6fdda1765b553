import { emptyPlace, type Place } from './land.ts';
import { covers, type Swath } from './passes.ts';
import { planeCoordinates } from './plane-raster.ts';
import { PIXEL, type SceneGrid, utmProjection } from './scene-grid.ts';
import type { World } from './world.ts';

/** What does not change from date to date under one row of a swath, one value for each pixel. */
export interface SceneGround {
  readonly grid: SceneGrid;
  /** 1 where the row covers the ground; the other planes are empty elsewhere. */
  readonly inside: Uint8Array;
  readonly x: Float32Array;
  readonly y: Float32Array;
  readonly elevation: Float32Array;
  /** Rise over run toward east and north. */
  readonly slopeEast: Float32Array;
  readonly slopeNorth: Float32Array;
  readonly parcel: Int32Array;
  readonly field: Float32Array;
  readonly wood: Float32Array;
  readonly water: Float32Array;
  readonly growth: Float32Array;
  readonly brightness: Float32Array;
}

/** Half the span of the differences that make a slope, m. */
const SLOPE_REACH = 30;

export function sceneGround(world: World, swath: Swath, rowIndex: number, grid: SceneGrid): SceneGround {
  const { x, y } = planeCoordinates({ ...grid, pixel: PIXEL }, utmProjection(grid.utmZone).inverse);
  const plane = () => new Float32Array(x.length);
  const ground: SceneGround = {
    grid,
    inside: new Uint8Array(x.length),
    x,
    y,
    elevation: plane(),
    slopeEast: plane(),
    slopeNorth: plane(),
    parcel: new Int32Array(x.length).fill(-1),
    field: plane(),
    wood: plane(),
    water: plane(),
    growth: plane(),
    brightness: plane(),
  };
  const { elevation } = world.terrain;
  const place = emptyPlace();
  for (let at = 0; at < x.length; at++) {
    const [px, py] = [x[at], y[at]];
    if (!covers(swath, rowIndex, world.scale, px, py)) continue;
    ground.inside[at] = 1;
    ground.elevation[at] = elevation(px, py);
    ground.slopeEast[at] = (elevation(px + SLOPE_REACH, py) - elevation(px - SLOPE_REACH, py)) / (2 * SLOPE_REACH);
    ground.slopeNorth[at] = (elevation(px, py + SLOPE_REACH) - elevation(px, py - SLOPE_REACH)) / (2 * SLOPE_REACH);
    world.land.placeAt(px, py, place);
    ground.parcel[at] = place.parcel;
    ground.field[at] = place.field;
    ground.wood[at] = place.wood;
    ground.water[at] = place.water;
    ground.growth[at] = place.growth;
    ground.brightness[at] = place.brightness;
  }
  return ground;
}

/** The place of one pixel, into `out`. */
export function groundPlace(ground: SceneGround, at: number, out: Place): void {
  out.parcel = ground.parcel[at];
  out.field = ground.field[at];
  out.wood = ground.wood[at];
  out.water = ground.water[at];
  out.grass = Math.max(0, 1 - out.field - out.wood - out.water);
  out.growth = ground.growth[at];
  out.brightness = ground.brightness[at];
}
