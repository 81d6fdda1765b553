import type { Buckets } from './buckets.ts';
import type { Ring } from './geometry.ts';
import { gridCells } from './segment-cells.ts';
import { orderAround, sideOf, within } from './turn.ts';

type Point = readonly [number, number];

/** A segment of a ring, with the vertices next to it. */
export interface Segment {
  readonly ring: number;
  readonly before: Point;
  readonly from: Point;
  readonly to: Point;
}

/** A place where an outline crosses itself. */
export interface Crossing {
  readonly at: Point;
  /** Index of a ring that takes part. */
  readonly ring: number;
}

/**
 * A point where the rings of a polygon cross themselves or one another, or null.
 *
 * Rings that only touch, run along one another or go out and back do not cross: areas are still defined there.
 * Doubtful cases (a vertex within 1e-9 degree of a side) are decided by the neighbours of the vertex.
 *
 * Segments are sorted into square cells of about their own number and compared within their cells, in order of
 * their left ends, so the cost follows the number of near neighbours and not the square of the segments.
 *
 * @param rings closed, without repeated positions
 */
export function findCrossing(rings: readonly Ring[]): Crossing | null {
  const segments = rings.flatMap((ring, index) => segmentsOf(ring, index));
  if (segments.length === 0) return null;
  const cells = gridCells(segments);
  for (let cell = 0; cell + 1 < cells.start.length; cell++) {
    const found = crossingInCell(segments, cells, cell);
    if (found) return found;
  }
  return null;
}

function segmentsOf(ring: Ring, index: number): Segment[] {
  const count = ring.length - 1;
  return ring.slice(0, -1).map((from, i) => ({
    ring: index,
    before: ring[(i + count - 1) % count],
    from,
    to: ring[i + 1],
  }));
}

const left = ({ from, to }: Segment) => Math.min(from[0], to[0]);
const right = ({ from, to }: Segment) => Math.max(from[0], to[0]);

function crossingInCell(segments: readonly Segment[], { start, list }: Buckets, cell: number): Crossing | null {
  const inCell = Array.from(list.subarray(start[cell], start[cell + 1]), (index) => segments[index]);
  inCell.sort((a, b) => left(a) - left(b));
  for (let i = 0; i < inCell.length; i++) {
    const end = right(inCell[i]);
    for (let j = i + 1; j < inCell.length && left(inCell[j]) <= end; j++) {
      const at = crossingOf(inCell[i], inCell[j]);
      if (at) return { at, ring: Math.max(inCell[i].ring, inCell[j].ring) };
    }
  }
  return null;
}

function crossingOf(s: Segment, t: Segment): Point | null {
  if (Math.max(s.from[1], s.to[1]) < Math.min(t.from[1], t.to[1])) return null;
  if (Math.max(t.from[1], t.to[1]) < Math.min(s.from[1], s.to[1])) return null;
  return crossingInside(s, t) ?? crossingAtVertex(s, t) ?? crossingThroughSide(s, t) ?? crossingThroughSide(t, s);
}

/** Both segments pass through the inside of the other. */
function crossingInside(s: Segment, t: Segment): Point | null {
  const [from, to] = [sideOf(t.from, t.to, s.from), sideOf(t.from, t.to, s.to)];
  if (from * to >= 0) return null;
  if (sideOf(s.from, s.to, t.from) * sideOf(s.from, s.to, t.to) >= 0) return null;
  const share = from / (from - to);
  return [s.from[0] + (s.to[0] - s.from[0]) * share, s.from[1] + (s.to[1] - s.from[1]) * share];
}

/** Two vertices coincide, and the way through the one leads from one side of the other to its other side. */
function crossingAtVertex(s: Segment, t: Segment): Point | null {
  if (!within(s.from, t.from)) return null;
  const enters = orderAround(s.from, s.before, s.to, t.before);
  const leaves = orderAround(s.from, s.before, s.to, t.to);
  return enters * leaves < 0 ? s.from : null;
}

/** The first vertex of `s` lies on the inside of `t`, its neighbours on either side. */
function crossingThroughSide(s: Segment, t: Segment): Point | null {
  if (within(s.from, t.from) || within(s.from, t.to)) return null;
  if (sideOf(t.from, t.to, s.from) !== 0) return null;
  const along = (t.to[0] - t.from[0]) * (s.from[0] - t.from[0]) + (t.to[1] - t.from[1]) * (s.from[1] - t.from[1]);
  const length2 = (t.to[0] - t.from[0]) ** 2 + (t.to[1] - t.from[1]) ** 2;
  if (along <= 0 || along >= length2) return null;
  return sideOf(t.from, t.to, s.before) * sideOf(t.from, t.to, s.to) < 0 ? s.from : null;
}
