import { makeParcels, type Parcels } from './parcels.ts';
import { roughNoise, smoothStep, valueNoise } from './random.ts';
import { grassland, openWater, type Stand, standOf, unevenness, woodland } from './seasons.ts';
import type { Terrain } from './terrain.ts';

/** What does not change with time at a place. The four weights add up to 1. */
export interface Place {
  /** Index of the field, or -1. */
  parcel: number;
  field: number;
  wood: number;
  water: number;
  grass: number;
  /** Variation of growth (some 400 m) and of soil brightness (some 120 m), -1..1. */
  growth: number;
  brightness: number;
}

export interface Land {
  readonly parcels: Parcels;
  /** Fills `out` with what lies at a place; returns it. */
  placeAt(x: number, y: number, out: Place): Place;
}

export const emptyPlace = (): Place => ({
  parcel: -1,
  field: 0,
  wood: 0,
  water: 0,
  grass: 1,
  growth: 0,
  brightness: 0,
});

export function makeLand(seed: number, terrain: Terrain): Land {
  const parcels = makeParcels(seed, terrain);
  return {
    parcels,
    placeAt(x, y, out) {
      const dry = smoothStep(-30, 30, terrain.shore(x, y));
      const field = dry * parcels.weightAt(x, y);
      const hills = terrain.hilliness(x, y);
      const wooded = hills > 0.2 ? smoothStep(0.36, 0.5, hills + 0.34 * roughNoise(x / 1100, y / 1100, seed + 34)) : 0;
      out.parcel = parcels.indexAt(x, y);
      out.field = field;
      out.water = 1 - dry;
      out.wood = wooded * (dry - field);
      out.grass = dry - field - out.wood;
      out.growth = valueNoise(x / 400, y / 400, seed + 32);
      out.brightness = valueNoise(x / 120, y / 120, seed + 33);
      return out;
    },
  };
}

/** Growth varies a stand by these shares around its mean. */
export const VARIATION = { field: 0.08, grass: 0.25, wood: 0.08 } as const;

/** All stands of the world on one day, ready for loops over pixels. */
export interface DayOfLand {
  /** By parcel. */
  readonly cover: Float64Array;
  readonly fraction: Float64Array;
  readonly uneven: Float64Array;
  readonly soilBrightness: Float64Array;
  readonly grass: Stand;
  readonly wood: Stand;
  readonly water: Stand;
}

export function dayOfLand({ parcels }: Land, day: number, bareSoil: number): DayOfLand {
  const stands = parcels.list.map((parcel) => standOf(parcel, day, bareSoil));
  return {
    cover: Float64Array.from(stands, ({ cover }) => cover),
    fraction: Float64Array.from(stands, ({ fraction }) => fraction),
    uneven: Float64Array.from(parcels.list, unevenness),
    soilBrightness: Float64Array.from(parcels.list, ({ brightness }) => brightness),
    grass: grassland(day),
    wood: woodland(day),
    water: openWater(day),
  };
}

/** True ET of the day over tall reference ET at a place. */
export function fractionAt(day: DayOfLand, place: Place): number {
  const { growth } = place;
  let fraction =
    place.water * day.water.fraction +
    place.wood * day.wood.fraction * (1 + VARIATION.wood * growth) +
    place.grass * day.grass.fraction * (1 + VARIATION.grass * growth);
  if (place.parcel >= 0) {
    const uneven = 1 + VARIATION.field * day.uneven[place.parcel] * growth;
    fraction += place.field * day.fraction[place.parcel] * uneven;
  }
  return fraction;
}
