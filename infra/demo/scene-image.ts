import { LAPSE } from './air.ts';
import { type CloudField, SKY } from './clouds.ts';
import { anchorLikeness } from './contamination.ts';
import { balanceTemperature, type Ground, setSoil } from './energy-balance.ts';
import { type DayOfLand, emptyPlace, fractionAt } from './land.ts';
import type { WorldScale } from './options.ts';
import type { Overpass } from './overpass.ts';
import { inScanGap } from './passes.ts';
import { type Surface, surfaceAt } from './reference-surface.ts';
import type { ResistanceFunction } from './resistance.ts';
import { groundPlace, type SceneGround } from './scene-ground.ts';
import { sensorNoise } from './sensor-noise.ts';
import { slopeDayTable } from './slope-day-table.ts';
import { reflectanceAt } from './spectra.ts';
import { ALBEDO, emissivityOf, leafAreaOf, roughnessOf } from './vegetation.ts';

/** Stored numbers of one scene, row by row. 0 is fill in all but the quality bands. */
export interface SceneImage {
  /** Blue to second shortwave infrared. */
  readonly reflectance: readonly Uint16Array[];
  readonly temperature: Uint16Array;
  readonly pixelQuality: Uint16Array;
  readonly saturation: Uint16Array;
}

export interface ImageInput {
  readonly scale: WorldScale;
  readonly seed: number;
  readonly ground: SceneGround;
  readonly overpass: Overpass;
  readonly stands: DayOfLand;
  readonly clouds: CloudField;
  readonly resistance: ResistanceFunction;
  /** Added to the surface temperature of land that looks like an anchor, K. */
  readonly contamination: number;
}

/** Collection 2 Level-2 scaling. */
export const REFLECTANCE_SCALE = { mult: 2.75e-5, add: -0.2 } as const;
export const TEMPERATURE_SCALE = { mult: 0.00341802, add: 149 } as const;

/** QA_PIXEL values of USGS for what the demo shows, by sensor and sky. */
const QUALITY = {
  oli: { clear: 21824, water: 21952, dilated: 21826, shadow: 23888, cloud: 22280, cirrus: 54596 },
  tm: { clear: 5440, water: 5504, dilated: 5442, shadow: 7440, cloud: 5896, cirrus: 5440 },
} as const;
const FILL_QUALITY = 1;
/** QA_RADSAT bit of the red band: band 4 of OLI, band 3 of TM. */
const RED_SATURATED = { oli: 1 << 3, tm: 1 << 2 } as const;
/** A glasshouse that blinds the red band, in half sizes of the basin, and its edge, m. */
const GLASSHOUSE = { u: -0.06, v: -0.46, edge: 130 } as const;

/** Standard deviation of the noise of surface temperature, K. */
const NOISE_K = 0.3;
/** What the energy balance of a pixel closes to, W m-2: far below what a stored number can show. */
const TOLERANCE = 1e-3;

/** One row of one pass as the sensor delivers it. */
export function sceneImage(input: ImageInput): SceneImage {
  const { ground, overpass, clouds, scale } = input;
  const { pass } = overpass;
  const { sensor } = pass.swath;
  const pixels = ground.inside.length;
  const image = {
    reflectance: Array.from({ length: 6 }, () => new Uint16Array(pixels)),
    temperature: new Uint16Array(pixels),
    pixelQuality: new Uint16Array(pixels).fill(FILL_QUALITY),
    saturation: new Uint16Array(pixels),
  };
  const noise = sensorNoise(ground.grid, input.seed + pass.stream);
  const surface = new SurfaceModel(input);
  const codes = QUALITY[sensor];
  const bands = surface.reflectance;
  for (let at = 0; at < pixels; at++) {
    if (ground.inside[at] === 0 || inScanGap(pass, scale, ground.x[at], ground.y[at])) continue;
    let kelvin = surface.temperatureAt(at) + NOISE_K * noise[at];
    const sky = clouds.at(ground.x[at], ground.y[at]);
    if (sky !== SKY.clear) kelvin = spoil(sky, bands, kelvin, noise[at]);
    for (let band = 0; band < 6; band++) {
      image.reflectance[band][at] = stored(bands[band], REFLECTANCE_SCALE);
    }
    image.temperature[at] = stored(kelvin, TEMPERATURE_SCALE);
    image.pixelQuality[at] = qualityOf(codes, sky, ground.water[at] > 0.5);
    if (isGlasshouse(scale, ground.x[at], ground.y[at])) {
      image.saturation[at] = RED_SATURATED[sensor];
      image.reflectance[2][at] = 65535;
    }
  }
  return image;
}

function stored(value: number, { mult, add }: { mult: number; add: number }): number {
  return Math.min(65535, Math.max(1, Math.round((value - add) / mult)));
}

function qualityOf(codes: (typeof QUALITY)['oli' | 'tm'], sky: number, water: boolean): number {
  switch (sky) {
    case SKY.cloud:
      return codes.cloud;
    case SKY.cirrus:
      return codes.cirrus;
    case SKY.shadow:
      return codes.shadow;
    case SKY.dilated:
      return codes.dilated;
    default:
      return water ? codes.water : codes.clear;
  }
}

/** What clouds make of a pixel: nothing that a reader may use. Changes the bands; returns the temperature. */
function spoil(sky: number, bands: Float64Array, kelvin: number, noise: number): number {
  switch (sky) {
    case SKY.cloud:
      for (let band = 0; band < 6; band++) bands[band] = 0.52 + 0.06 * noise;
      return 274 + 5 * noise;
    case SKY.cirrus:
      for (let band = 0; band < 6; band++) bands[band] = 0.7 * bands[band] + 0.12;
      return kelvin - 9;
    case SKY.shadow:
      for (let band = 0; band < 6; band++) bands[band] *= 0.45;
      return kelvin - 5;
    default:
      for (let band = 0; band < 6; band++) bands[band] += 0.06;
      return kelvin - 3;
  }
}

function isGlasshouse({ halfWidth, halfHeight }: WorldScale, x: number, y: number): boolean {
  const { u, v, edge } = GLASSHOUSE;
  return Math.abs(x - u * halfWidth) < edge / 2 && Math.abs(y - v * halfHeight) < edge / 2;
}

/**
 * The forward model: from the true ET fraction of the day and the reflectance of a pixel to the temperature at which
 * its energy balance closes. On slopes the fraction at the overpass differs from that of the day as the sun of the
 * moment does from the sun of the day (Allen, Tasumi & Trezza 2007).
 */
class SurfaceModel {
  /** Bands of the pixel asked for last. */
  readonly reflectance = new Float64Array(6);
  readonly #input: ImageInput;
  readonly #weights: readonly number[];
  readonly #place = emptyPlace();
  readonly #ground: Ground = {
    absorbed: 0,
    skyLongwave: 0,
    emissivity: 1,
    soilShare: 0,
    soilPerDegree: 0,
    pressureKPa: 100,
    wind200: 5,
    logRoughness: -5,
    evaporation: 0,
    toSeaLevel: 0,
  };
  readonly #slopeDay: (slopeEast: number, slopeNorth: number) => number;
  #last = 305;

  constructor(input: ImageInput) {
    this.#input = input;
    this.#weights = ALBEDO[input.overpass.pass.swath.sensor];
    this.#slopeDay = slopeDayTable(input.overpass.sun.declination);
  }

  temperatureAt(at: number): number {
    const { ground, overpass, stands, scale, resistance, contamination } = this.#input;
    const place = this.#place;
    groundPlace(ground, at, place);
    const cover = reflectanceAt(stands, place, this.reflectance);
    const [x, y, elevation] = [ground.x[at], ground.y[at], ground.elevation[at]];
    const [slopeEast, slopeNorth] = [ground.slopeEast[at], ground.slopeNorth[at]];

    const value = (surface: Surface) => surfaceAt(surface, scale, x, y, elevation);
    const level = value(overpass.sunLevel);
    const sloped = Math.max(0, level + value(overpass.sunSouth) * slopeNorth + value(overpass.sunWest) * slopeEast);
    const fraction = (fractionAt(stands, place) * (sloped / level)) / this.#slopeDay(slopeEast, slopeNorth);

    const target = this.#ground;
    const [red, nir] = [this.reflectance[2], this.reflectance[3]];
    const openWater = nir < red;
    const leafArea = leafAreaOf(red, nir);
    setSoil(target, leafArea, openWater);
    target.emissivity = emissivityOf(leafArea, openWater);
    target.absorbed = (1 - this.#albedo()) * value(overpass.shortwave) * sloped;
    target.skyLongwave = value(overpass.skyLongwave);
    target.pressureKPa = value(overpass.pressureKPa);
    target.wind200 = value(overpass.wind200);
    target.logRoughness = Math.log(roughnessOf(leafArea, slopeEast, slopeNorth));
    target.evaporation = fraction * value(overpass.reference);
    target.toSeaLevel = LAPSE * elevation;
    this.#last = balanceTemperature(target, overpass.layer, resistance, this.#last, TOLERANCE);
    return contamination === 0 ? this.#last : this.#last + contamination * anchorLikeness(cover, place.field);
  }

  #albedo(): number {
    let sum = 0;
    for (let band = 0; band < 6; band++) sum += this.#weights[band] * this.reflectance[band];
    return sum;
  }
}
