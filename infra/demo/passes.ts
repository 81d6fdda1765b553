import { dateOf } from './calendar.ts';
import type { WorldScale } from './options.ts';

/** A strip of ground that one satellite sees on its overpass days. */
export interface Swath {
  readonly path: number;
  readonly satellite: 'LANDSAT_7' | 'LANDSAT_8';
  readonly sensor: 'oli' | 'tm';
  /** Rows of scenes, north to south. */
  readonly rows: readonly number[];
  readonly utmZone: number;
  /** UTC of the first row's centre on the first day, hours; it wanders by a few seconds. */
  readonly hour: number;
  readonly days: readonly number[];
  /** Share of the basin that clouds take on each day. */
  readonly cloud: readonly number[];
  /** Which side of the basin it covers: its edge lies beyond the middle, on the other side. */
  readonly side: 'east' | 'west';
}

/** Rows follow one another at this interval, hours. */
export const ROW_HOURS = 24 / 3600;

export const SWATHS: readonly Swath[] = [
  {
    path: 33,
    satellite: 'LANDSAT_8',
    sensor: 'oli',
    rows: [32],
    utmZone: 33,
    hour: 9 + 52 / 60 + 10 / 3600,
    days: [-3, 13, 29, 45, 61],
    cloud: [0.05, 0.1, 0, 0.16, 0.06],
    side: 'east',
  },
  {
    path: 34,
    satellite: 'LANDSAT_7',
    sensor: 'tm',
    rows: [31, 32],
    utmZone: 32,
    hour: 9 + 38 / 60 + 41 / 3600,
    days: [4, 20, 36, 52, 68],
    cloud: [0.08, 0.03, 0.13, 0, 0.06],
    side: 'west',
  },
];

export interface Pass {
  readonly swath: Swath;
  readonly day: number;
  readonly date: string;
  /** Centre time of the first row, hours UTC from the first day of the period. */
  readonly hours: number;
  readonly cloud: number;
  /** Its own stream of noise. */
  readonly stream: number;
}

/** All passes in the order of time. */
export const PASSES: readonly Pass[] = SWATHS.flatMap((swath) =>
  swath.days.map((day, k) => ({
    swath,
    day,
    date: dateOf(day),
    hours: day * 24 + swath.hour + ((7 * k) % 5) / 3600,
    cloud: swath.cloud[k],
    stream: 100 * swath.path + k,
  })),
).sort((a, b) => a.hours - b.hours);

/** Tilt of a descending track against the meridian, rad. */
const TILT = 0.23;
/** Edges of the swaths lie this far beyond the middle, and rows overlap by this much to each side, in half sizes. */
const OVERLAP = 0.3;
const ROW_OVERLAP = 0.14;

const COS_TILT = Math.cos(TILT);
const SIN_TILT = Math.sin(TILT);

/** Distance across the track, east positive, m. */
const acrossTrack = (x: number, y: number): number => x * COS_TILT - y * SIN_TILT;
/** Distance along the track, north positive, m. */
const alongTrack = (x: number, y: number): number => x * SIN_TILT + y * COS_TILT;

/** Whether a row of a swath covers a place. */
export function covers(swath: Swath, rowIndex: number, scale: WorldScale, x: number, y: number): boolean {
  const across = acrossTrack(x, y);
  const side = swath.side === 'east' ? across : -across;
  if (side < -OVERLAP * scale.halfWidth) return false;
  if (swath.rows.length === 1) return true;
  const along = alongTrack(x, y);
  return (rowIndex === 0 ? along : -along) > -ROW_OVERLAP * scale.halfHeight;
}

/** Gaps between the scans of the broken scan-line corrector: this far apart along the track, m. */
const GAP_SPACING = 990;
const WIDEST_GAP = 95;

/** Whether a place falls into a gap: none in the middle of the swath, widest at its edge. */
export function inScanGap(pass: Pass, scale: WorldScale, x: number, y: number): boolean {
  if (pass.swath.satellite !== 'LANDSAT_7') return false;
  const toEdge = (acrossTrack(x, y) / scale.halfWidth + 0.6) / (OVERLAP + 0.6);
  if (toEdge <= 0) return false;
  const position = (alongTrack(x, y) + pass.stream * 377) / GAP_SPACING;
  return (position - Math.floor(position)) * GAP_SPACING < WIDEST_GAP * Math.min(1, toEdge);
}
