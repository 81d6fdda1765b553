// Four pixels at a time. min and max hand NaN on, as Math.min and Math.max do.

// @ts-ignore: decorator
@inline export function all(x: f32): v128 {
  return f32x4.splat(x);
}
// @ts-ignore: decorator
@inline export function add(a: v128, b: v128): v128 {
  return f32x4.add(a, b);
}
// @ts-ignore: decorator
@inline export function sub(a: v128, b: v128): v128 {
  return f32x4.sub(a, b);
}
// @ts-ignore: decorator
@inline export function mul(a: v128, b: v128): v128 {
  return f32x4.mul(a, b);
}
// @ts-ignore: decorator
@inline export function div(a: v128, b: v128): v128 {
  return f32x4.div(a, b);
}
// @ts-ignore: decorator
@inline export function mulAdd(a: v128, b: v128, c: v128): v128 {
  return f32x4.add(f32x4.mul(a, b), c);
}
// @ts-ignore: decorator
@inline export function sqrt(a: v128): v128 {
  return f32x4.sqrt(a);
}
// @ts-ignore: decorator
@inline export function min(a: v128, b: v128): v128 {
  return f32x4.min(a, b);
}
// @ts-ignore: decorator
@inline export function max(a: v128, b: v128): v128 {
  return f32x4.max(a, b);
}
// @ts-ignore: decorator
@inline export function less(a: v128, b: v128): v128 {
  return f32x4.lt(a, b);
}
/** `a` where the mask is set, `b` elsewhere. */
// @ts-ignore: decorator
@inline export function pick(mask: v128, a: v128, b: v128): v128 {
  return v128.bitselect(a, b, mask);
}
// @ts-ignore: decorator
@inline export function square(a: v128): v128 {
  return f32x4.mul(a, a);
}
