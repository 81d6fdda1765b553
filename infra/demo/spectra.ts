import { type DayOfLand, type Place, VARIATION } from './land.ts';

/** Surface reflectance of pure materials in the six reflective bands, blue to second shortwave infrared. */
const SOIL = [0.1, 0.145, 0.2, 0.26, 0.33, 0.29];
const CROP = [0.025, 0.06, 0.032, 0.47, 0.19, 0.085];
const WOOD = [0.02, 0.038, 0.026, 0.3, 0.13, 0.06];
const WATER = [0.05, 0.045, 0.03, 0.018, 0.008, 0.005];

/** Soil brightness varies by this share around its mean. */
const SOIL_VARIATION = 0.05;

/** A full canopy covers all; growth cannot make it more. */
const atMostFull = (cover: number): number => Math.min(1, cover);

/**
 * Reflectance of a place on a day, a linear mixture of materials.
 *
 * @param out six bands
 * @returns share of the place under green canopy
 */
export function reflectanceAt(day: DayOfLand, place: Place, out: Float64Array): number {
  const { parcel, growth } = place;
  let crop = place.grass * day.grass.cover * (1 + VARIATION.grass * growth);
  let soilBrightness = 1;
  if (parcel >= 0) {
    crop += place.field * atMostFull(day.cover[parcel] * (1 + VARIATION.field * day.uneven[parcel] * growth));
    soilBrightness += place.field * (day.soilBrightness[parcel] - 1);
  }
  const wood = place.wood * atMostFull(day.wood.cover * (1 + VARIATION.wood * growth));
  const soil = (1 - place.water - crop - wood) * soilBrightness * (1 + SOIL_VARIATION * place.brightness);
  for (let band = 0; band < 6; band++) {
    out[band] = soil * SOIL[band] + crop * CROP[band] + wood * WOOD[band] + place.water * WATER[band];
  }
  return crop + wood;
}
