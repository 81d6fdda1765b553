import type { WorldScale } from './options.ts';
import { toDegrees } from './plane.ts';
import { valueNoise } from './random.ts';

/** Longitude, latitude; degrees with six decimals, so that neighbours share their vertices exactly. */
export type Point = readonly [number, number];
export type Ring = readonly Point[];

export interface SubBasin {
  readonly name: string;
  /** Closed, counter-clockwise. */
  readonly ring: Ring;
}

const BOUNDARY_POINTS = 144;
const LINE_PARTS = 12;

/** Two meeting points of streams inside, in half sizes. */
const HUBS = { west: [-0.27, 0.06], east: [0.29, -0.07] } as const;
type Hub = keyof typeof HUBS;

/** Sub-basins around the boundary: where each begins (degrees counter-clockwise from east) and its hubs. */
const SECTORS: readonly { name: string; from: number; hubs: readonly Hub[] }[] = [
  { name: 'Upper Orrin', from: 110, hubs: ['west'] },
  { name: 'Tallow Fell', from: 180, hubs: ['west'] },
  { name: 'Mere Flats', from: 250, hubs: ['east', 'west'] },
  { name: 'Lower Orrin', from: 290, hubs: ['east'] },
  { name: 'Brackwater', from: 360, hubs: ['east'] },
  { name: 'Sandle', from: 430, hubs: ['west', 'east'] },
];

/** The basin's outline and six sub-basins that tile it: every inner line is drawn once and used by both sides. */
export function makeOutline(seed: number, scale: WorldScale): { boundary: Ring; subBasins: readonly SubBasin[] } {
  const point = (u: number, v: number): Point => {
    const [longitude, latitude] = toDegrees(u * scale.halfWidth, v * scale.halfHeight);
    return [round(longitude), round(latitude)];
  };
  const rim = Array.from({ length: BOUNDARY_POINTS }, (_, k): readonly [number, number] => {
    const angle = (2 * Math.PI * k) / BOUNDARY_POINTS;
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    const radius = 0.92 + 0.06 * valueNoise(2.3 * c, 2.3 * s, seed + 71);
    const bulge = (t: number) => Math.sign(t) * Math.abs(t) ** 0.8;
    return [radius * bulge(c), radius * bulge(s)];
  });
  const vertexAt = (degrees: number) => Math.round((degrees / 360) * BOUNDARY_POINTS);
  const onRim = (vertex: number) => rim[vertex % BOUNDARY_POINTS];
  const line = (from: readonly [number, number], to: readonly [number, number], stream: number): Point[] =>
    wobblyLine(from, to, seed + stream).map(([u, v]) => point(u, v));

  const bridge = line(HUBS.west, HUBS.east, 72);
  const spokes = SECTORS.map(({ from, hubs }, k) => {
    // The line at the start of a sector ends at the hub that it shares with the sector before.
    const before = SECTORS[(k + SECTORS.length - 1) % SECTORS.length];
    const hub = hubs.find((candidate) => before.hubs.includes(candidate) && isOnSide(candidate, from)) as Hub;
    return line(onRim(vertexAt(from)), HUBS[hub], 73 + k);
  });
  const subBasins = SECTORS.map(({ name, from, hubs }, k) => {
    const next = SECTORS[(k + 1) % SECTORS.length].from;
    const last = vertexAt(next > from ? next : next + 360);
    const arc = Array.from({ length: last - vertexAt(from) + 1 }, (_, n) => point(...onRim(vertexAt(from) + n)));
    const inward = spokes[(k + 1) % SECTORS.length];
    const outward = spokes[k].toReversed();
    const across = hubs.length < 2 ? [] : hubs[0] === 'west' ? bridge : bridge.toReversed();
    return { name, ring: withoutRepeats([...arc, ...inward, ...across, ...outward]) };
  });
  const boundary = withoutRepeats([...rim.map(([u, v]) => point(u, v)), point(...rim[0])]);
  return { boundary, subBasins };
}

/** Spokes of the western half end at the western hub. */
function isOnSide(hub: Hub, degrees: number): boolean {
  const west = Math.cos((degrees * Math.PI) / 180) < 0;
  return (hub === 'west') === west;
}

function wobblyLine(
  [u0, v0]: readonly [number, number],
  [u1, v1]: readonly [number, number],
  seed: number,
): (readonly [number, number])[] {
  return Array.from({ length: LINE_PARTS + 1 }, (_, k) => {
    const t = k / LINE_PARTS;
    const sway = 0.07 * Math.sin(Math.PI * t) * valueNoise(3.1 * t, 0.5, seed);
    return [u0 + (u1 - u0) * t - sway * (v1 - v0), v0 + (v1 - v0) * t + sway * (u1 - u0)];
  });
}

function withoutRepeats(points: readonly Point[]): Ring {
  return points.filter(([x, y], k) => k === 0 || x !== points[k - 1][0] || y !== points[k - 1][1]);
}

function round(degrees: number): number {
  return Math.round(degrees * 1e6) / 1e6;
}
