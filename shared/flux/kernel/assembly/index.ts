import { absorptionPass, pressurePass, skyPass, transmissivityPass } from './atmosphere';
import { fluxStage } from './fluxes';
import { BLOCK, BLOCK_BYTES } from './layout';
import { firstPass, secantPass } from './stability';
import { drivePass, leafAreaPass, radiationPass } from './surface';
import { all } from './lanes';
import { atan as atanLanes, exp as expLanes, ln as lnLanes, pow as powLanes } from './elementary';

/** Secant steps after the first pass: enough for 1e-5 of the heat even in nearly calm air over hot soil. */
const SECANT_PASSES: i32 = 4;

// @ts-ignore: decorator
@inline function chain(
  inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, blocks: i32,
  metric: bool, terrain: bool,
): void {
  for (let b = 0; b < blocks; b++) {
    const base = <usize>b * BLOCK_BYTES;
    // Pass by pass over the block: the vectors of a pass do not wait for one another.
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) pressurePass(inputs, stride, scr, base + i, i);
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) absorptionPass(inputs, stride, params, scr, base + i, i);
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) transmissivityPass(scr, i);
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) skyPass(scr, i);
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) leafAreaPass(inputs, stride, scr, base + i, i, metric);
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) {
      radiationPass(inputs, outputs, stride, params, scr, base + i, i, metric, terrain);
    }
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) {
      drivePass(inputs, stride, params, scr, base + i, i, metric, terrain);
    }
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) firstPass(scr, i);
    for (let pass = 0; pass < SECANT_PASSES; pass++) {
      for (let i: usize = 0; i < BLOCK_BYTES; i += 16) secantPass(scr, i);
    }
    for (let i: usize = 0; i < BLOCK_BYTES; i += 16) {
      fluxStage(inputs, outputs, stride, params, hours, scr, base + i, i, metric, terrain);
    }
  }
}

/** Pixels are computed in whole blocks: planes must have room up to the next multiple of 256. */
export function metricLevel(inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, blocks: i32): void {
  chain(inputs, outputs, stride, params, hours, scr, blocks, true, false);
}
export function metricTerrain(inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, blocks: i32): void {
  chain(inputs, outputs, stride, params, hours, scr, blocks, true, true);
}
export function sebalLevel(inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, blocks: i32): void {
  chain(inputs, outputs, stride, params, hours, scr, blocks, false, false);
}
export function sebalTerrain(inputs: usize, outputs: usize, stride: usize, params: usize, hours: usize, scr: usize, blocks: i32): void {
  chain(inputs, outputs, stride, params, hours, scr, blocks, false, true);
}

/** First byte that the caller may use. */
export function heapBase(): usize {
  return __heap_base;
}
export function blockPixels(): i32 {
  return BLOCK;
}

// The elementary functions by themselves, for their tests.
export function testLn(x: f32): f32 {
  return f32x4.extract_lane(lnLanes(all(x)), 0);
}
export function testExp(x: f32): f32 {
  return f32x4.extract_lane(expLanes(all(x)), 0);
}
export function testAtan(x: f32): f32 {
  return f32x4.extract_lane(atanLanes(all(x)), 0);
}
export function testPow(x: f32, y: f32): f32 {
  return f32x4.extract_lane(powLanes(all(x), y), 0);
}
