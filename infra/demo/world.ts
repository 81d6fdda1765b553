import { bareSoilFractions } from './bare-soil.ts';
import { type DayOfLand, dayOfLand, type Land, makeLand } from './land.ts';
import { type DemoSize, SCALES, type WorldScale } from './options.ts';
import { PASSES } from './passes.ts';
import { tallReferenceDay } from './reference-et.ts';
import { fitSurface, type Surface } from './reference-surface.ts';
import { makeTerrain, type Terrain } from './terrain.ts';
import { makeWeather, type Weather } from './weather.ts';

/** First and last day for which the world has weather. */
export const RECORD = { from: -75, to: 71 } as const;
/** The soil is dry when the balance begins; the only rain falls later. */
const BALANCE_FROM = -40;

/** An invented basin of which everything is known: land, weather, and the true ET of every place and day. */
export interface World {
  readonly seed: number;
  readonly size: DemoSize;
  readonly scale: WorldScale;
  readonly terrain: Terrain;
  readonly land: Land;
  readonly weather: Weather;
  /** Tall reference ET of a day, mm. */
  referenceDay(day: number): Surface;
  /** ET fraction of bare soil. */
  bareSoil(day: number): number;
  stands(day: number): DayOfLand;
}

export function makeWorld(seed: number, size: DemoSize): World {
  const scale = SCALES[size];
  const terrain = makeTerrain(seed * 1000, scale);
  const land = makeLand(seed * 1000, terrain);
  const weather = makeWeather(seed * 1000, new Set(PASSES.map(({ day }) => day)));
  const plain = { x: 0, y: 0, elevation: 100 };
  const balanceDays = Array.from({ length: RECORD.to - BALANCE_FROM + 1 }, (_, k) => BALANCE_FROM + k);
  const bare = bareSoilFractions(
    balanceDays.map((day) => tallReferenceDay(weather, day, plain)),
    balanceDays.map((day) => weather.rainOf(day)),
  );
  const bareSoil = (day: number) => bare[day - BALANCE_FROM];
  const surfaces = new Map<number, Surface>();
  return {
    seed,
    size,
    scale,
    terrain,
    land,
    weather,
    bareSoil,
    stands: (day) => dayOfLand(land, day, bareSoil(day)),
    referenceDay(day) {
      const known = surfaces.get(day);
      if (known) return known;
      const surface = fitSurface(scale, (site) => tallReferenceDay(weather, day, site));
      surfaces.set(day, surface);
      return surface;
    },
  };
}
