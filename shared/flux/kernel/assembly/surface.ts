import { atan, exp, ln } from './elementary';
import { add, all, div, less, max, min, mul, mulAdd, pick, sqrt, square, sub } from './lanes';
import * as M from './layout';

// Second stage: radiation, soil heat, roughness and the temperature difference of four pixels, in three passes.
// The formulas and their sources stand in surface.ts, radiation.ts, soil-heat.ts and methods/ of shared/flux.

const SIGMA: f32 = 5.67e-8;

// @ts-ignore: decorator
@inline function ndviOf(inputs: usize, stride: usize, at: usize): v128 {
  const red = M.plane(inputs, stride, M.RED, at);
  const nir = M.plane(inputs, stride, M.NIR, at);
  return div(sub(nir, red), add(nir, red));
}

// @ts-ignore: decorator
@inline export function leafAreaPass(inputs: usize, stride: usize, scr: usize, at: usize, in_: usize, metric: bool): void {
  const red = M.plane(inputs, stride, M.RED, at);
  const nir = M.plane(inputs, stride, M.NIR, at);
  const l: f32 = metric ? 0.1 : 0.5;
  const savi = div(mul(sub(nir, red), all(1 + l)), add(add(nir, red), all(l)));
  const index = mul(ln(mul(sub(all(0.69), savi), all(1.0 / 0.59))), all(-1.0 / 0.91));
  const bounded = min(max(index, all(0)), all(6));
  M.keep(scr, M.S_LEAF_AREA, in_, pick(less(all(0.687), savi), all(6), bounded));
}

// @ts-ignore: decorator
@inline function soilHeatMetric(rn: v128, lai: v128, lst: v128): v128 {
  const covered = mul(rn, mulAdd(exp(mul(lai, all(-0.521))), all(0.18), all(0.05)));
  const bare = mulAdd(sub(lst, all(273.15)), all(1.8), mul(rn, all(0.084)));
  return pick(less(lai, all(0.5)), bare, covered);
}

// @ts-ignore: decorator
@inline function soilHeatSebal(rn: v128, albedo: v128, lst: v128, ndvi: v128): v128 {
  const ground = mul(sub(lst, all(273.15)), mulAdd(albedo, all(0.0074), all(0.0038)));
  return mul(mul(rn, ground), sub(all(1), mul(square(square(ndvi)), all(0.98))));
}

/** Net radiation and soil heat. */
// @ts-ignore: decorator
@inline export function radiationPass(
  inputs: usize, outputs: usize, stride: usize, params: usize, scr: usize, at: usize, in_: usize,
  metric: bool, terrain: bool,
): void {
  const albedo = M.plane(inputs, stride, M.ALBEDO, at);
  const lst = M.plane(inputs, stride, M.LST, at);
  const lai = M.scratch(scr, M.S_LEAF_AREA, in_);
  const ndvi = ndviOf(inputs, stride, at);
  const water = less(ndvi, all(0));
  const emissivity = pick(water, all(0.985), pick(less(all(3), lai), all(0.98), mulAdd(lai, all(0.01), all(0.95))));

  let onSlope = M.plane(inputs, stride, M.SUN_UP, at);
  if (terrain) {
    const east = mul(M.plane(inputs, stride, M.SLOPE_EAST, at), M.plane(inputs, stride, M.SUN_EAST, at));
    const north = mul(M.plane(inputs, stride, M.SLOPE_NORTH, at), M.plane(inputs, stride, M.SUN_NORTH, at));
    onSlope = sub(sub(onSlope, east), north);
  }
  const sun = mul(M.parameter(params, M.P_SUN), M.scratch(scr, M.S_TRANSMISSIVITY, in_));
  const shortwave = mul(sun, max(all(0), onSlope));
  const lapse = mul(M.parameter(params, M.P_LAPSE), M.plane(inputs, stride, M.ELEVATION, at));
  const air = sub(M.plane(inputs, stride, M.AIR_TEMPERATURE_DATUM, at), lapse);
  const longwaveMask = f32x4.gt(M.parameter(params, M.P_SURFACE_LONGWAVE), all(0.5));
  const warm = square(pick(longwaveMask, lst, air));
  const sky = mul(mul(M.scratch(scr, M.S_SKY, in_), warm), warm);
  const longwave = mul(sub(sky, square(square(lst))), all(SIGMA));
  const rn = mulAdd(sub(all(1), albedo), shortwave, mul(emissivity, longwave));
  const soil = metric ? soilHeatMetric(rn, lai, lst) : soilHeatSebal(rn, albedo, lst, ndvi);
  M.write(outputs, stride, M.NET_RADIATION, at, rn);
  M.write(outputs, stride, M.SOIL_HEAT, at, pick(water, mul(rn, all(0.5)), soil));
}

/** 1 + (slope in degrees - 5) / 20 above 5 degrees. */
// @ts-ignore: decorator
@inline function mountainRoughness(east: v128, north: v128): v128 {
  const degrees = mul(atan(sqrt(mulAdd(east, east, square(north)))), all(57.29577951308232));
  return mulAdd(max(sub(degrees, all(5)), all(0)), all(0.05), all(1));
}

/** Roughness, and how strongly the temperature difference drives heat into the air. */
// @ts-ignore: decorator
@inline export function drivePass(
  inputs: usize, stride: usize, params: usize, scr: usize, at: usize, in_: usize, metric: bool, terrain: bool,
): void {
  const lst = M.plane(inputs, stride, M.LST, at);
  const z = M.plane(inputs, stride, M.ELEVATION, at);
  let roughness = max(mul(M.scratch(scr, M.S_LEAF_AREA, in_), all(0.018)), all(0.005));
  let wind = M.plane(inputs, stride, M.WIND_200, at);
  if (metric && terrain) {
    const east = M.plane(inputs, stride, M.SLOPE_EAST, at);
    const north = M.plane(inputs, stride, M.SLOPE_NORTH, at);
    roughness = mul(roughness, mountainRoughness(east, north));
    const above = sub(z, M.plane(inputs, stride, M.STATION_ELEVATION, at));
    wind = mul(wind, max(mulAdd(above, all(0.0001), all(1)), all(0.5)));
  }
  // Surface minus zero first: both are near 300 K, and their difference keeps all its digits.
  const lapse = M.parameter(params, M.P_LAPSE);
  const excess = mulAdd(lapse, sub(z, M.parameter(params, M.P_DATUM)), sub(lst, M.parameter(params, M.P_ZERO)));
  const dT = mul(M.parameter(params, M.P_SLOPE), excess);
  const pressure = M.scratch(scr, M.S_PRESSURE, in_);
  M.keep(scr, M.S_LOG_ROUGHNESS, in_, sub(all(5.298317366548036), ln(roughness)));
  M.keep(scr, M.S_DRIVE, in_, div(mul(dT, all(16.0 * 9.81)), mul(lst, square(wind))));
  // 1000 / (1.01 * 287) * cp * k^2
  const density = mul(pressure, all(1000.0 / (1.01 * 287.0) * 1004.0 * 0.41 * 0.41));
  M.keep(scr, M.S_HEAT, in_, div(mul(density, mul(dT, wind)), sub(lst, dT)));
}
