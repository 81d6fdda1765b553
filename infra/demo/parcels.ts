import { hashUnit, shuffled, smoothStep } from './random.ts';
import type { Terrain } from './terrain.ts';

export type Crop = 'lucerne' | 'fallow' | 'maize' | 'wheat' | 'orchard' | 'deficit';

/** Twelve neighbouring fields share these crops in an order of their own, so every district has all of them. */
const DECK: readonly Crop[] = [
  ...['lucerne', 'lucerne', 'lucerne', 'fallow', 'fallow', 'fallow'],
  ...['maize', 'maize', 'wheat', 'wheat', 'orchard', 'deficit'],
] as Crop[];
const BLOCK = { across: 4, down: 3 } as const;

export interface Parcel {
  /** Centre, m on the world's map. */
  readonly x: number;
  readonly y: number;
  readonly crop: Crop;
  /** 0..1: how early or late, how good. */
  readonly phase: number;
  /** Brightness of its soil against the mean. */
  readonly brightness: number;
  /** Watered by a turning arm: a disc inside its square. */
  readonly round: boolean;
}

/** Edge of a field's square, m. */
export const FIELD_EDGE = 510;
/** A field fades into the land around it over this width, m: no step that a bilinear reader could not follow. */
const SOFT_EDGE = 50;
const TURN = { cos: Math.cos(0.41), sin: Math.sin(0.41) };
/** Cells on each side of the centre. */
const REACH = 64;
const SIDE = 2 * REACH;

export interface Parcels {
  readonly list: readonly Parcel[];
  /** Index into `list`, or -1 where there is no field. */
  indexAt(x: number, y: number): number;
  /** 1 well inside the field, 0 on its border and where there is none. */
  weightAt(x: number, y: number): number;
}

/** A mosaic of square and round fields on the plain. */
export function makeParcels(seed: number, terrain: Terrain): Parcels {
  const list: Parcel[] = [];
  const cells = new Int32Array(SIDE * SIDE).fill(-1);
  for (let j = -REACH; j < REACH; j++) {
    for (let i = -REACH; i < REACH; i++) {
      const p = (i + 0.5) * FIELD_EDGE;
      const q = (j + 0.5) * FIELD_EDGE;
      const x = p * TURN.cos - q * TURN.sin;
      const y = p * TURN.sin + q * TURN.cos;
      if (terrain.hilliness(x, y) > 0.05 || terrain.shore(x, y) < 420 || hashUnit(i, j, seed + 21) < 0.06) continue;
      cells[(j + REACH) * SIDE + i + REACH] = list.push({ x, y, ...parcelOf(i, j, seed) }) - 1;
    }
  }
  const cellOf = (p: number, q: number): number => {
    const i = Math.floor(p / FIELD_EDGE) + REACH;
    const j = Math.floor(q / FIELD_EDGE) + REACH;
    return i < 0 || j < 0 || i >= SIDE || j >= SIDE ? -1 : cells[j * SIDE + i];
  };
  return {
    list,
    indexAt: (x, y) => cellOf(x * TURN.cos + y * TURN.sin, y * TURN.cos - x * TURN.sin),
    weightAt(x, y) {
      const p = x * TURN.cos + y * TURN.sin;
      const q = y * TURN.cos - x * TURN.sin;
      const index = cellOf(p, q);
      if (index < 0) return 0;
      const fromCentreP = Math.abs(p - (Math.floor(p / FIELD_EDGE) + 0.5) * FIELD_EDGE);
      const fromCentreQ = Math.abs(q - (Math.floor(q / FIELD_EDGE) + 0.5) * FIELD_EDGE);
      const half = FIELD_EDGE / 2;
      const inside = list[index].round
        ? half - Math.hypot(fromCentreP, fromCentreQ)
        : half - Math.max(fromCentreP, fromCentreQ);
      return smoothStep(0, SOFT_EDGE, inside);
    },
  };
}

function parcelOf(i: number, j: number, seed: number): Omit<Parcel, 'x' | 'y'> {
  const bi = Math.floor(i / BLOCK.across);
  const bj = Math.floor(j / BLOCK.down);
  const order = shuffled(DECK, Math.floor(hashUnit(bi, bj, seed + 22) * 2 ** 30));
  return {
    crop: order[i - bi * BLOCK.across + BLOCK.across * (j - bj * BLOCK.down)],
    phase: hashUnit(i, j, seed + 23),
    brightness: 1 + 0.08 * (hashUnit(i, j, seed + 24) - 0.5),
    round: hashUnit(bi, bj, seed + 25) < 0.35,
  };
}
