/** WGS 84, degrees. */
export type Position = readonly [longitude: number, latitude: number];
/** Closed: the last position equals the first. */
export type Ring = readonly Position[];
/** Outer ring counter-clockwise, holes clockwise. */
export type Polygon = readonly Ring[];

export interface Boundary {
  readonly polygons: readonly Polygon[];
}

export interface Zone {
  readonly name: string;
  readonly polygons: readonly Polygon[];
}

/** Area of a closed ring in square degrees; positive when counter-clockwise with x right and y up. */
export function signedArea(ring: Ring): number {
  let sum = 0;
  for (let i = 1; i < ring.length; i++) {
    // Relative to the first position, so that far-away rings do not lose digits.
    const [x0, y0] = [ring[i - 1][0] - ring[0][0], ring[i - 1][1] - ring[0][1]];
    const [x1, y1] = [ring[i][0] - ring[0][0], ring[i][1] - ring[0][1]];
    sum += x0 * y1 - x1 * y0;
  }
  return sum / 2;
}

/** Bounding box in degrees. `east` is above 180 when the polygons lie on both sides of the antimeridian. */
export interface Extent {
  readonly west: number;
  readonly south: number;
  readonly east: number;
  readonly north: number;
}

/**
 * Bounding box of a boundary. A region on both sides of the antimeridian comes as polygons that end at 180 and at
 * -180 degrees (RFC 7946, 3.1.9); the widest gap between its polygons is then what the box leaves out (5.2).
 */
export function extentOf({ polygons }: Boundary): Extent {
  let [south, north] = [90, -90];
  const spans = polygons.map(([outer]) => {
    let [west, east] = [180, -180];
    for (const [longitude, latitude] of outer) {
      west = Math.min(west, longitude);
      east = Math.max(east, longitude);
      south = Math.min(south, latitude);
      north = Math.max(north, latitude);
    }
    return { west, east };
  });
  spans.sort((a, b) => a.west - b.west);
  const first = spans[0].west;
  let [west, reach] = [first, spans[0].east];
  let [end, widest] = [0, 0];
  for (const span of spans) {
    if (span.west - reach > widest) {
      widest = span.west - reach;
      west = span.west;
      end = reach;
    }
    reach = Math.max(reach, span.east);
  }
  // The gap across the antimeridian wins a tie: then nothing is turned.
  if (widest <= first + 360 - reach) return { west: first, south, east: reach, north };
  return { west, south, east: end + 360, north };
}
