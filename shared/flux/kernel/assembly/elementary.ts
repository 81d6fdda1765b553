import {
  ATAN_0, ATAN_1, ATAN_2, ATAN_3, ATAN_4, ATAN_5, ATAN_6, ATAN_7, ATAN_8,
  EXP_0, EXP_1, EXP_2, EXP_3, EXP_4,
  LN_0, LN_1, LN_2, LN_3, LN_4, LN_5, LN_6, LN_7, LN_8,
} from './coefficients';
import { add, all, div, less, mul, mulAdd, pick, square, sub } from './lanes';

// Elementary functions of our own: the same bits on every machine.

const LN2: f32 = 0.6931471805599453;
/** ln 2 in two parts, so that n ln 2 is exact in the first for every exponent n. */
const LN2_HIGH: f32 = 0.693145751953125;
const LN2_LOW: f32 = 1.428606765330187e-6;
const LOG2_E: f32 = 1.4426950408889634;

/** Natural logarithm of a positive normal number: exponent and a mantissa between 2/3 and 4/3. */
// @ts-ignore: decorator
@inline export function ln(x: v128): v128 {
  const exponent = i32x4.shr_s(i32x4.sub(x, i32x4.splat(0x3f2aaaab)), 23);
  const t = sub(i32x4.sub(x, i32x4.shl(exponent, 23)), all(1));
  let tail = mulAdd(all(LN_8), t, all(LN_7));
  tail = mulAdd(tail, t, all(LN_6));
  tail = mulAdd(tail, t, all(LN_5));
  tail = mulAdd(tail, t, all(LN_4));
  tail = mulAdd(tail, t, all(LN_3));
  tail = mulAdd(tail, t, all(LN_2));
  tail = mulAdd(tail, t, all(LN_1));
  tail = mulAdd(tail, t, all(LN_0));
  const result = mulAdd(f32x4.convert_i32x4_s(exponent), all(LN2), mulAdd(square(t), tail, t));
  // What is no positive number has no logarithm; the exponent trick would not notice.
  return pick(less(all(0), x), result, all(f32.NaN));
}

/** 1.5 * 2^23: a number added to it is rounded to an integer, which stands in the lowest bits of the sum. */
const ROUNDER: f32 = 12582912;

/** e^x for |x| up to 80: 2^n times e^r with |r| at most ln 2 / 2. */
// @ts-ignore: decorator
@inline export function exp(x: v128): v128 {
  const rounded = mulAdd(x, all(LOG2_E), all(ROUNDER));
  const n = sub(rounded, all(ROUNDER));
  const r = sub(sub(x, mul(n, all(LN2_HIGH))), mul(n, all(LN2_LOW)));
  let tail = mulAdd(all(EXP_4), r, all(EXP_3));
  tail = mulAdd(tail, r, all(EXP_2));
  tail = mulAdd(tail, r, all(EXP_1));
  tail = mulAdd(tail, r, all(EXP_0));
  const mantissa = add(all(1), mulAdd(square(r), tail, r));
  // n moves into the exponent; what else stands in the sum is shifted out.
  const scale = i32x4.add(i32x4.shl(rounded, 23), i32x4.splat(127 << 23));
  return mul(mantissa, scale);
}

/** x^y for positive x. */
// @ts-ignore: decorator
@inline export function pow(x: v128, y: f32): v128 {
  return exp(mul(ln(x), all(y)));
}

/** Arc tangent of a number from 0 to 1, rad. */
// @ts-ignore: decorator
@inline export function atanUpToOne(x: v128): v128 {
  const s = square(x);
  let shape = mulAdd(all(ATAN_8), s, all(ATAN_7));
  shape = mulAdd(shape, s, all(ATAN_6));
  shape = mulAdd(shape, s, all(ATAN_5));
  shape = mulAdd(shape, s, all(ATAN_4));
  shape = mulAdd(shape, s, all(ATAN_3));
  shape = mulAdd(shape, s, all(ATAN_2));
  shape = mulAdd(shape, s, all(ATAN_1));
  shape = mulAdd(shape, s, all(ATAN_0));
  return mul(x, shape);
}

/** Arc tangent of a number from 0 on, rad. */
// @ts-ignore: decorator
@inline export function atan(x: v128): v128 {
  const steep = less(all(1), x);
  const inner = atanUpToOne(pick(steep, div(all(1), x), x));
  return pick(steep, sub(all(1.5707963267948966), inner), inner);
}
