import { type DayOfLand, type Place, VARIATION } from './land.ts';
import { TERMS } from './reference-surface.ts';
import type { World } from './world.ts';

/** True ET summed over some days, mm, as a function of place. */
export interface EtField {
  /** Sums of fraction times reference ET, by parcel and term of the reference surface. */
  readonly parcels: Float64Array;
  readonly uneven: Float64Array;
  readonly grass: Float64Array;
  readonly wood: Float64Array;
  readonly water: Float64Array;
}

/** Adds up, day by day, true fraction times reference ET of the day. Both are known for every day: no interpolation. */
export function etField(world: World, days: readonly number[]): EtField {
  const parcels = world.land.parcels.list.length;
  const field = {
    parcels: new Float64Array(parcels * TERMS),
    uneven: new Float64Array(parcels),
    grass: new Float64Array(TERMS),
    wood: new Float64Array(TERMS),
    water: new Float64Array(TERMS),
  };
  for (const day of days) {
    const stands: DayOfLand = world.stands(day);
    const reference = world.referenceDay(day);
    field.uneven.set(stands.uneven);
    for (let term = 0; term < TERMS; term++) {
      field.grass[term] += stands.grass.fraction * reference[term];
      field.wood[term] += stands.wood.fraction * reference[term];
      field.water[term] += stands.water.fraction * reference[term];
      for (let k = 0; k < parcels; k++) field.parcels[k * TERMS + term] += stands.fraction[k] * reference[term];
    }
  }
  return field;
}

/** Weights of the terms of a reference surface at a place. */
export function termsAt(world: World, x: number, y: number, out: Float64Array): void {
  const z = world.terrain.elevation(x, y) / 1000;
  out[0] = 1;
  out[1] = x / world.scale.halfWidth;
  out[2] = y / world.scale.halfHeight;
  out[3] = z;
  out[4] = z * z;
}

/** True ET of a place, mm. */
export function etAt(field: EtField, place: Place, terms: Float64Array): number {
  const { growth, parcel } = place;
  const grass = place.grass * (1 + VARIATION.grass * growth);
  const wood = place.wood * (1 + VARIATION.wood * growth);
  const crop = parcel < 0 ? 0 : place.field * (1 + VARIATION.field * field.uneven[parcel] * growth);
  let et = 0;
  for (let term = 0; term < TERMS; term++) {
    let sum = grass * field.grass[term] + wood * field.wood[term] + place.water * field.water[term];
    if (parcel >= 0) sum += crop * field.parcels[parcel * TERMS + term];
    et += sum * terms[term];
  }
  return et;
}
