import { PRESSURE_0, PRESSURE_1, PRESSURE_2, PRESSURE_3, PRESSURE_4, PRESSURE_5 } from './coefficients';
import { exp, ln, pow } from './elementary';
import { add, all, div, mul, mulAdd, sub } from './lanes';
import * as M from './layout';

// First stage: the air above four pixels, in passes that each end in one scratch value. Together they would be a single
// chain of powers that wait for one another; apart, the processor works on several vectors at once.
// The formulas and their sources stand in radiation.ts of shared/flux.

/** Air pressure, kPa. */
// @ts-ignore: decorator
@inline export function pressurePass(inputs: usize, stride: usize, scr: usize, at: usize, in_: usize): void {
  const r = mul(M.plane(inputs, stride, M.ELEVATION, at), all(0.0065 / 293.0));
  let power = mulAdd(all(PRESSURE_5), r, all(PRESSURE_4));
  power = mulAdd(power, r, all(PRESSURE_3));
  power = mulAdd(power, r, all(PRESSURE_2));
  power = mulAdd(power, r, all(PRESSURE_1));
  power = mulAdd(power, r, all(PRESSURE_0));
  M.keep(scr, M.S_PRESSURE, in_, mul(power, all(101.3)));
}

/** Exponent of the transmissivity: gases and water on the path of the sun. */
// @ts-ignore: decorator
@inline export function absorptionPass(inputs: usize, stride: usize, params: usize, scr: usize, at: usize, in_: usize): void {
  const pressure = M.scratch(scr, M.S_PRESSURE, in_);
  const cosZenith = M.plane(inputs, stride, M.SUN_UP, at);
  const water = mulAdd(mul(M.plane(inputs, stride, M.VAPOUR_PRESSURE, at), pressure), all(0.14), all(2.1));
  const gases = div(mul(pressure, all(0.00146)), mul(M.parameter(params, M.P_TURBIDITY), cosZenith));
  const column = mul(pow(div(water, cosZenith), 0.4), all(0.075));
  M.keep(scr, M.S_ABSORPTION, in_, add(gases, column));
}

/** Clear-sky transmissivity. */
// @ts-ignore: decorator
@inline export function transmissivityPass(scr: usize, in_: usize): void {
  const absorption = M.scratch(scr, M.S_ABSORPTION, in_);
  M.keep(scr, M.S_TRANSMISSIVITY, in_, mulAdd(exp(sub(all(0), absorption)), all(0.627), all(0.35)));
}

/** Emissivity of the clear sky. */
// @ts-ignore: decorator
@inline export function skyPass(scr: usize, in_: usize): void {
  const depth = sub(all(0), ln(M.scratch(scr, M.S_TRANSMISSIVITY, in_)));
  M.keep(scr, M.S_SKY, in_, mul(pow(depth, 0.09), all(0.85)));
}
