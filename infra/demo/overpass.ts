import { clearSky, KELVIN, pressureAt, SOLAR_CONSTANT, skyLongwave } from './air.ts';
import type { AirLayer } from './energy-balance.ts';
import { type Pass, ROW_HOURS } from './passes.ts';
import { toDegrees } from './plane.ts';
import { hashUnit } from './random.ts';
import { tallReferenceAround } from './reference-et.ts';
import { fitSurface, type Surface } from './reference-surface.ts';
import { gridPoint, type SceneGrid } from './scene-grid.ts';
import { type Sun, sunAt, sunTerms } from './sun.ts';
import type { Site } from './weather.ts';
import type { World } from './world.ts';

/** Weather and sun of one pass. */
export interface Overpass {
  readonly pass: Pass;
  readonly sun: Sun;
  /** Sun on level ground, and what a rise of the land toward the north (a face to the south) and east adds. */
  readonly sunLevel: Surface;
  readonly sunSouth: Surface;
  readonly sunWest: Surface;
  /** Shortwave radiation for each unit of sun on the slope, W m-2. */
  readonly shortwave: Surface;
  readonly skyLongwave: Surface;
  readonly pressureKPa: Surface;
  readonly wind200: Surface;
  /** Tall reference ET, mm/h. */
  readonly reference: Surface;
  readonly layer: AirLayer;
}

/** @param grids of the rows of the pass */
export function makeOverpass(world: World, pass: Pass, grids: readonly SceneGrid[]): Overpass {
  const { scale, weather } = world;
  const middle = pass.hours + (ROW_HOURS * (pass.swath.rows.length - 1)) / 2;
  const sun = sunAt(middle);
  const { at, rate } = track(grids);
  const aloft = weather.airAt(middle, { x: 0, y: 0, elevation: 0 });
  const sunOver = ({ x, y }: Site) => {
    const [longitude, latitude] = toDegrees(x, y);
    // The satellite comes from the north: it passes each latitude a little later than the one above.
    const hourAngle = sun.greenwichHourAngle + (longitude / 180 + (rate * (latitude - at)) / 12) * Math.PI;
    return sunTerms(sun.declination, hourAngle, (latitude * Math.PI) / 180);
  };
  const transmissivity = (site: Site) =>
    clearSky(pressureAt(site.elevation), weather.airAt(middle, site).vapourKPa, sunOver(site).level);
  return {
    pass,
    sun,
    sunLevel: fitSurface(scale, (site) => sunOver(site).level),
    sunSouth: fitSurface(scale, (site) => sunOver(site).south),
    sunWest: fitSurface(scale, (site) => sunOver(site).west),
    shortwave: fitSurface(scale, (site) => (SOLAR_CONSTANT * transmissivity(site)) / sun.distance ** 2),
    skyLongwave: fitSurface(scale, (site) =>
      skyLongwave(transmissivity(site), weather.airAt(middle, site).celsius + KELVIN),
    ),
    pressureKPa: fitSurface(scale, (site) => pressureAt(site.elevation)),
    wind200: fitSurface(scale, (site) => weather.airAt(middle, site).wind200),
    reference: fitSurface(scale, (site) => tallReferenceAround(weather, middle, site)),
    layer: {
      ratio: 0.27 + 0.05 * hashUnit(pass.stream, 1, world.seed + 61),
      reference: aloft.celsius + KELVIN + 0.6 * hashUnit(pass.stream, 2, world.seed + 61),
    },
  };
}

/** Latitude of the middle of the pass, and hours for each degree: the rows' centres are 24 s apart. */
function track(grids: readonly SceneGrid[]): { at: number; rate: number } {
  const latitudes = grids.map((grid) => gridPoint(grid, grid.width / 2, grid.height / 2)[1]);
  const at = latitudes.reduce((sum, latitude) => sum + latitude, 0) / latitudes.length;
  const first = latitudes[0];
  const last = latitudes[latitudes.length - 1];
  return { at, rate: first === last ? 0 : (ROW_HOURS * (latitudes.length - 1)) / (last - first) };
}
