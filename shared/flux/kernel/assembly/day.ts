import { add, all, div, less, max, min, mul, mulAdd, pick, sub } from './lanes';
import * as M from './layout';

// Fourth stage, part: from the overpass to the day.

/** Of the morning; the afternoon mirrors it but for the east-west part of the slope. */
const SAMPLES: usize = 24;

/** Radiation of the day on the slope over that on the level (slopeDayFactor in radiation.ts). */
// @ts-ignore: decorator
@inline export function slopeDayFactor(inputs: usize, stride: usize, params: usize, hours: usize, at: usize): v128 {
  const east = M.plane(inputs, stride, M.SLOPE_EAST, at);
  const north = M.plane(inputs, stride, M.SLOPE_NORTH, at);
  const sinLat = M.plane(inputs, stride, M.SIN_LATITUDE, at);
  const cosLat = M.plane(inputs, stride, M.COS_LATITUDE, at);
  const sinD = M.parameter(params, M.P_SIN_DECLINATION);
  const cosD = M.parameter(params, M.P_COS_DECLINATION);
  const up = mul(sinD, sinLat);
  const upCos = mul(cosD, cosLat);
  const a = sub(up, mul(north, mul(sinD, cosLat)));
  const b = mulAdd(north, mul(cosD, sinLat), upCos);
  const c = mul(east, cosD);
  const tangents = div(up, upCos);
  let onSlope = all(0);
  let onLevel = all(0);
  for (let k: usize = 0; k < SAMPLES; k++) {
    const cosine = v128.load32_splat(hours + k * 12);
    const sine = v128.load32_splat(hours + k * 12 + 4);
    const steepness = v128.load32_splat(hours + k * 12 + 8);
    const day = min(all(1), max(all(0), mulAdd(add(tangents, cosine), steepness, all(0.5))));
    onLevel = mulAdd(day, max(all(0), mulAdd(upCos, cosine, up)), onLevel);
    const noonward = mulAdd(b, cosine, a);
    const sideward = mul(c, sine);
    const both = add(max(all(0), add(noonward, sideward)), max(all(0), sub(noonward, sideward)));
    onSlope = mulAdd(day, both, onSlope);
  }
  return pick(less(all(0), onLevel), div(onSlope, mul(onLevel, all(2))), all(1));
}

/** True in lanes that are not level. */
// @ts-ignore: decorator
@inline export function sloping(inputs: usize, stride: usize, at: usize): v128 {
  const east = M.plane(inputs, stride, M.SLOPE_EAST, at);
  const north = M.plane(inputs, stride, M.SLOPE_NORTH, at);
  return v128.or(f32x4.ne(east, all(0)), f32x4.ne(north, all(0)));
}

/** Crad of METRIC. */
// @ts-ignore: decorator
@inline export function radiationRatio(inputs: usize, stride: usize, params: usize, hours: usize, at: usize): v128 {
  const slopes = sloping(inputs, stride, at);
  if (!v128.any_true(slopes)) return all(1);
  const sunUp = M.plane(inputs, stride, M.SUN_UP, at);
  const east = mul(M.plane(inputs, stride, M.SLOPE_EAST, at), M.plane(inputs, stride, M.SUN_EAST, at));
  const north = mul(M.plane(inputs, stride, M.SLOPE_NORTH, at), M.plane(inputs, stride, M.SUN_NORTH, at));
  const inst = max(all(0), sub(sub(sunUp, east), north));
  const day = slopeDayFactor(inputs, stride, params, hours, at);
  return pick(slopes, div(mul(day, sunUp), inst), all(1));
}
