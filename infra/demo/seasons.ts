import type { Crop, Parcel } from './parcels.ts';

/** How a piece of land stands on one day. */
export interface Stand {
  /** Share of the ground under green canopy, 0..1. */
  readonly cover: number;
  /** True ET of the day over tall reference ET. */
  readonly fraction: number;
}

/** Largest ET fraction: a dense wet canopy. */
export const FULL_FRACTION = 1.05;

const logistic = (x: number): number => 1 / (1 + Math.exp(-x));

/**
 * The season of each crop: smooth in time, so that a straight line between two overpasses is an honest guess.
 *
 * @param day from the first day of the period
 * @param bareSoil ET fraction of bare soil on that day, from the rain
 */
const SEASONS: Readonly<Record<Crop, (day: number, phase: number, bareSoil: number) => Stand>> = {
  // Dense and watered all summer: the wet end of every scene.
  lucerne: () => ({ cover: 1, fraction: FULL_FRACTION }),
  // Bare and dry: the dry end.
  fallow: (_day, _phase, bareSoil) => ({ cover: 0, fraction: bareSoil }),
  maize(day, phase) {
    const growth = logistic((day - (22 + 12 * phase)) / 7);
    return { cover: 0.04 + 0.96 * growth, fraction: 0.22 + (FULL_FRACTION - 0.22) * growth };
  },
  wheat(day, phase, bareSoil) {
    const green = 1 - logistic((day - (8 + 8 * phase)) / 6);
    return { cover: 0.1 + 0.68 * green, fraction: Math.max(bareSoil, 0.1) + 0.8 * green };
  },
  orchard: (day, phase) => ({ cover: 0.6 + 0.06 * phase, fraction: 0.68 + 0.08 * phase + 0.0006 * day }),
  deficit: (day, phase) => ({ cover: 0.56 - 0.0012 * day, fraction: 0.46 + 0.1 * phase - 0.0015 * day }),
};

/** How much of the variation within a field a crop shows; the two ends of the scale are even. */
const UNEVEN: Readonly<Record<Crop, number>> = { lucerne: 0, fallow: 0, maize: 0.6, wheat: 1, orchard: 1, deficit: 1 };

export function standOf(parcel: Parcel, day: number, bareSoil: number): Stand {
  return SEASONS[parcel.crop](day, parcel.phase, bareSoil);
}

export function unevenness({ crop }: Parcel): number {
  return UNEVEN[crop];
}

/** Dry grass between the fields and on the slopes, woods on the hills, open water. */
export const grassland = (day: number): Stand => ({ cover: 0.2 - 0.001 * day, fraction: 0.22 - 0.0014 * day });
export const woodland = (day: number): Stand => ({ cover: 0.85, fraction: 0.62 - 0.0009 * day });
export const openWater = (day: number): Stand => ({ cover: 0, fraction: 0.62 + 0.0008 * day });
