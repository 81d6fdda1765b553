import {
  HEAT_P_0, HEAT_P_1, HEAT_P_2, HEAT_P_3, HEAT_P_4,
  HEAT_Q_0, HEAT_Q_1, HEAT_Q_2, HEAT_Q_3, HEAT_Q_4, HEAT_Q_5,
  MOMENTUM_P_0, MOMENTUM_P_1, MOMENTUM_P_2, MOMENTUM_P_3, MOMENTUM_P_4,
  MOMENTUM_Q_0, MOMENTUM_Q_1, MOMENTUM_Q_2, MOMENTUM_Q_3, MOMENTUM_Q_4, MOMENTUM_Q_5,
} from './coefficients';
import { add, all, div, max, min, mul, mulAdd, pick, sqrt, square, sub } from './lanes';
import * as M from './layout';

// Third stage: the stability of the air over four pixels, w = -16 / L (see heatTransfer in aerodynamics.ts).
//
// A = ln(200 / z0m) - psi_m and B = ln(z2 / z1) - psi_h(z2) + psi_h(z1) are fractions, A = a / p and B = b / q: their
// numerators and denominators are handed on apart, so that a whole pass divides only once for each of its results.

/** ln(2 / 0.1) */
const HEIGHT_RATIO: f32 = 2.995732273553991;

/** The fourth root of 1 + 200 w, less 1: what psi_m at 200 m depends on. 0 in stable air. */
// @ts-ignore: decorator
@inline function momentumArgument(unstable: v128): v128 {
  return sub(sqrt(sqrt(mulAdd(unstable, all(200), all(1)))), all(1));
}

/** p of A = a / p */
// @ts-ignore: decorator
@inline function momentumBelow(t: v128): v128 {
  let sum = mulAdd(all(MOMENTUM_Q_5), t, all(MOMENTUM_Q_4));
  sum = mulAdd(sum, t, all(MOMENTUM_Q_3));
  sum = mulAdd(sum, t, all(MOMENTUM_Q_2));
  sum = mulAdd(sum, t, all(MOMENTUM_Q_1));
  return mulAdd(sum, t, all(MOMENTUM_Q_0));
}

/** a of A = a / p: (ln(200 / z0m) + 5 stable) p less the numerator of psi_m */
// @ts-ignore: decorator
@inline function momentumAbove(t: v128, logRoughness: v128, stable: v128, below: v128): v128 {
  let sum = mulAdd(all(MOMENTUM_P_4), t, all(MOMENTUM_P_3));
  sum = mulAdd(sum, t, all(MOMENTUM_P_2));
  sum = mulAdd(sum, t, all(MOMENTUM_P_1));
  sum = mulAdd(sum, t, all(MOMENTUM_P_0));
  return sub(mul(mulAdd(stable, all(5), logRoughness), below), mul(sum, t));
}

/** The root of 1 + 2 w, less 1: what psi_h at 2 m depends on. 0 in stable air. */
// @ts-ignore: decorator
@inline function heatArgument(unstable: v128): v128 {
  return sub(sqrt(mulAdd(unstable, all(2), all(1))), all(1));
}

/** q of B = b / q */
// @ts-ignore: decorator
@inline function heatBelow(t: v128): v128 {
  let sum = mulAdd(all(HEAT_Q_5), t, all(HEAT_Q_4));
  sum = mulAdd(sum, t, all(HEAT_Q_3));
  sum = mulAdd(sum, t, all(HEAT_Q_2));
  sum = mulAdd(sum, t, all(HEAT_Q_1));
  return mulAdd(sum, t, all(HEAT_Q_0));
}

/** b of B = b / q; in stable air B grows by 5 (2 - 0.1) / L */
// @ts-ignore: decorator
@inline function heatAbove(t: v128, stable: v128, below: v128): v128 {
  let sum = mulAdd(all(HEAT_P_4), t, all(HEAT_P_3));
  sum = mulAdd(sum, t, all(HEAT_P_2));
  sum = mulAdd(sum, t, all(HEAT_P_1));
  sum = mulAdd(sum, t, all(HEAT_P_0));
  return mulAdd(mul(stable, all(4.75)), below, sum);
}

/** z / L at 2 m in stable air, 0 .. 1; 0 in unstable air. */
// @ts-ignore: decorator
@inline function stability(w: v128): v128 {
  return min(max(mul(w, all(-0.125)), all(0)), all(1));
}

/** Sensible heat: rho cp dT k^2 u200 over A B. */
// @ts-ignore: decorator
@inline export function sensibleHeat(scr: usize, in_: usize): v128 {
  const w = M.scratch(scr, M.S_W, in_);
  const stable = stability(w);
  const unstable = max(w, all(0));
  const tm = momentumArgument(unstable);
  const th = heatArgument(unstable);
  const p = momentumBelow(tm);
  const q = heatBelow(th);
  const a = momentumAbove(tm, M.scratch(scr, M.S_LOG_ROUGHNESS, in_), stable, p);
  const b = heatAbove(th, stable, q);
  return div(mul(M.scratch(scr, M.S_HEAT, in_), mul(p, q)), mul(a, b));
}

/** F(w) - w, with F(w) = drive A^2 / B. */
// @ts-ignore: decorator
@inline function step(w: v128, scr: usize, in_: usize): v128 {
  const stable = stability(w);
  const unstable = max(w, all(0));
  const tm = momentumArgument(unstable);
  const th = heatArgument(unstable);
  const p = momentumBelow(tm);
  const q = heatBelow(th);
  const a = momentumAbove(tm, M.scratch(scr, M.S_LOG_ROUGHNESS, in_), stable, p);
  const b = heatAbove(th, stable, q);
  const next = div(mul(mul(M.scratch(scr, M.S_DRIVE, in_), q), square(a)), mul(square(p), b));
  return sub(next, w);
}

/**
 * A start and the first shortened step. Where neutral air would give w = D, unstable air ends within some 10 per cent
 * of D / (1 + 0.24 t(D)): found by least squares over the physical range, and no more than a start.
 */
// @ts-ignore: decorator
@inline export function firstPass(scr: usize, in_: usize): void {
  const neutral = square(M.scratch(scr, M.S_LOG_ROUGHNESS, in_));
  const d = mul(mul(M.scratch(scr, M.S_DRIVE, in_), neutral), all(1.0 / HEIGHT_RATIO));
  const w = div(d, mulAdd(momentumArgument(max(d, all(0))), all(0.24), all(1)));
  const g = step(w, scr, in_);
  M.keep(scr, M.S_W_BEFORE, in_, w);
  M.keep(scr, M.S_STEP_BEFORE, in_, g);
  M.keep(scr, M.S_W, in_, mulAdd(g, all(0.65), w));
}

/** One secant step. The ratio is bounded, so that rounding noise near the solution cannot throw it off. */
// @ts-ignore: decorator
@inline export function secantPass(scr: usize, in_: usize): void {
  const w = M.scratch(scr, M.S_W, in_);
  const g = step(w, scr, in_);
  const rise = sub(g, M.scratch(scr, M.S_STEP_BEFORE, in_));
  const ratio = div(sub(w, M.scratch(scr, M.S_W_BEFORE, in_)), rise);
  const known = pick(f32x4.ne(rise, all(0)), ratio, all(-0.5));
  const bounded = min(all(-0.25), max(all(-1.6), known));
  M.keep(scr, M.S_W_BEFORE, in_, w);
  M.keep(scr, M.S_STEP_BEFORE, in_, g);
  M.keep(scr, M.S_W, in_, sub(w, mul(g, bounded)));
}
