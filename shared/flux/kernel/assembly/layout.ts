// Where things lie in the kernel's memory. The caller lays out planes and parameters; see flux-kernel.ts.

/** Pixels that go through the stages together: their scratch values stay in the first-level cache. */
export const BLOCK: i32 = 256;
export const BLOCK_BYTES: usize = 1024;

// Input planes, in the order of INPUT_PLANES.
export const RED: usize = 0;
export const NIR: usize = 1;
export const ALBEDO: usize = 2;
export const LST: usize = 3;
export const ELEVATION: usize = 4;
export const SLOPE_EAST: usize = 5;
export const SLOPE_NORTH: usize = 6;
export const SUN_EAST: usize = 7;
export const SUN_NORTH: usize = 8;
export const SUN_UP: usize = 9;
export const SIN_LATITUDE: usize = 10;
export const COS_LATITUDE: usize = 11;
export const EXTRATERRESTRIAL_DAY: usize = 12;
export const AIR_TEMPERATURE_DATUM: usize = 13;
export const VAPOUR_PRESSURE: usize = 14;
export const WIND_200: usize = 15;
export const STATION_ELEVATION: usize = 16;
export const REFERENCE_INST: usize = 17;
export const REFERENCE_DAY: usize = 18;
export const TRANSMISSIVITY_DAY: usize = 19;

// Output planes, in the order of OUTPUT_PLANES.
export const NET_RADIATION: usize = 0;
export const SOIL_HEAT: usize = 1;
export const SENSIBLE_HEAT: usize = 2;
export const LATENT_HEAT: usize = 3;
export const EVAPORATIVE_FRACTION: usize = 4;
export const DAY_FRACTION: usize = 5;

// Parameters, f32 each, in the order of PARAMETERS in flux-kernel.ts.
export const P_SLOPE: usize = 0;
export const P_ZERO: usize = 1;
export const P_DATUM: usize = 2;
export const P_LAPSE: usize = 3;
export const P_TURBIDITY: usize = 4;
/** 1: surface temperature in the longwave term; 0: air temperature. */
export const P_SURFACE_LONGWAVE: usize = 5;
/** Solar constant times inverse squared distance. */
export const P_SUN: usize = 6;
export const P_SIN_DECLINATION: usize = 7;
export const P_COS_DECLINATION: usize = 8;

// Scratch arrays of one block.
export const S_LOG_ROUGHNESS: usize = 0;
export const S_DRIVE: usize = 1;
/** rho cp dT k^2 u200: over A B it is the sensible heat. */
export const S_HEAT: usize = 2;
export const S_W: usize = 3;
export const S_W_BEFORE: usize = 4;
export const S_STEP_BEFORE: usize = 5;
export const S_PRESSURE: usize = 6;
export const S_ABSORPTION: usize = 7;
export const S_TRANSMISSIVITY: usize = 8;
export const S_SKY: usize = 9;
export const S_LEAF_AREA: usize = 10;

// @ts-ignore: decorator
@inline export function parameter(base: usize, index: usize): v128 {
  return v128.load32_splat(base + (index << 2));
}
// @ts-ignore: decorator
@inline export function plane(base: usize, stride: usize, index: usize, at: usize): v128 {
  return v128.load(base + index * stride + at);
}
// @ts-ignore: decorator
@inline export function write(base: usize, stride: usize, index: usize, at: usize, value: v128): void {
  v128.store(base + index * stride + at, value);
}
// @ts-ignore: decorator
@inline export function scratch(base: usize, index: usize, at: usize): v128 {
  return v128.load(base + index * BLOCK_BYTES + at);
}
// @ts-ignore: decorator
@inline export function keep(base: usize, index: usize, at: usize, value: v128): void {
  v128.store(base + index * BLOCK_BYTES + at, value);
}
