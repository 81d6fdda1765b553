type Point = readonly [number, number];

/** Points nearer than this (degrees, 0.1 mm on the ground) count as one: it is the rounding of common GIS files. */
const NEAR_DEG = 1e-9;

/** True when two points count as one. */
export function within(a: Point, b: Point): boolean {
  return Math.abs(a[0] - b[0]) <= NEAR_DEG && Math.abs(a[1] - b[1]) <= NEAR_DEG;
}

/** Distance of `point` from the line through a and b, positive to its left; 0 when it is near enough to lie on it. */
export function sideOf(a: Point, b: Point, point: Point): number {
  const [dx, dy] = [b[0] - a[0], b[1] - a[1]];
  const distance = (dx * (point[1] - a[1]) - dy * (point[0] - a[0])) / Math.sqrt(dx * dx + dy * dy);
  return Math.abs(distance) > NEAR_DEG ? distance : 0;
}

/**
 * Whether `point` is met going counter-clockwise around `centre` from `first` to `second` (1) or from `second` to
 * `first` (-1); 0 when its direction is that of either, or not known.
 */
export function orderAround(centre: Point, first: Point, second: Point, point: Point): -1 | 0 | 1 {
  const toFirst = sideOf(centre, first, point);
  const toSecond = sideOf(centre, second, point);
  const ahead = (a: Point, b: Point) =>
    (a[0] - centre[0]) * (b[0] - centre[0]) + (a[1] - centre[1]) * (b[1] - centre[1]);
  if (within(centre, point) || (toFirst === 0 && ahead(first, point) > 0)) return 0;
  if (toSecond === 0 && ahead(second, point) > 0) return 0;
  const angle = (p: Point) => Math.atan2(p[1] - centre[1], p[0] - centre[0]);
  const turn = (p: Point) => (angle(p) - angle(first) + 4 * Math.PI) % (2 * Math.PI);
  return turn(point) < turn(second) ? 1 : -1;
}
