import { readFile } from 'node:fs/promises';
import { parse } from 'csv-parse/sync';
import type { BasinFile } from '../../shared/contract/basin-file.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { LandcoverClass, LeftOut, Plan, PlannedPass, RasterInput } from '../../shared/contract/plan.ts';
import { openFile } from '../../shared/raster/file-source.ts';
import { openRaster } from '../../shared/raster/raster-file.ts';
import { fingerprintFile } from '../../shared/raster/raster-fingerprint.ts';
import { pixelToLonLat } from '../../shared/region/pixel-place.ts';
import { tilesTouching } from '../../shared/region/tiles-touching.ts';
import { periodsOf, solarOffsetHours } from '../../shared/time/calendar.ts';
import { readRegion } from './region-input.ts';
import { survey } from './survey.ts';
import { readWeather } from './weather-input.ts';

/**
 * Everything that is known before a pixel is read: grid, tiles, passes, weather, periods. Reads metadata only.
 *
 * @param basin with absolute paths
 * @throws BasinloomError for a basin that cannot be computed at all; what can be left out is in `leftOut`
 */
export async function makePlan(basin: BasinFile, signal?: AbortSignal): Promise<Plan> {
  const { grid, boundaryPixels, zones } = await readRegion(basin);
  const tiles = tilesTouching(grid, boundaryPixels);
  const [longitude] = pixelToLonLat(grid, grid.rows / 2, grid.columns / 2);
  const offset = solarOffsetHours(longitude);
  const terrain = basin.terrain ? await rasterInput(basin.terrain) : undefined;
  const landcover = basin.landcover
    ? { ...(await rasterInput(basin.landcover.path)), classes: await readClasses(basin.landcover.classes) }
    : undefined;
  const { passes, leftOut } = await survey(basin, grid, tiles, offset, signal);
  const periods = periodsOf(basin.period.from, basin.period.to, basin.period.step);
  const weather = await readWeather(basin, passes, periods, offset);
  const planned = passes.flatMap((entry, index): PlannedPass[] => {
    const found = weather.ofPass[index];
    return found ? [{ ...entry, weather: found }] : [];
  });
  const inPeriod = planned.some(({ pass }) => pass.date >= basin.period.from && pass.date <= basin.period.to);
  const everythingLeftOut = [...leftOut, ...weather.leftOut];
  if (!inPeriod) throw nothingToDo(basin, everythingLeftOut);
  return {
    version: 1,
    basin,
    grid,
    datumElevationM: datumElevation(planned),
    solarOffsetHours: offset,
    ...(terrain && { terrain }),
    ...(landcover && { landcover }),
    boundary: boundaryPixels,
    zones,
    tiles,
    passes: planned,
    days: weather.days,
    periods,
    leftOut: everythingLeftOut,
  };
}

function nothingToDo({ period }: BasinFile, leftOut: readonly LeftOut[]): BasinloomError {
  const reasons = leftOut.map(({ error }) => `\n  - ${error.message}`).join('');
  return new BasinloomError('NOTHING_TO_DO', { from: period.from, to: period.to, reasons });
}

/** Mean elevation of the stations in use: where the weather was measured, datum and surface temperature agree. */
function datumElevation(passes: readonly PlannedPass[]): number {
  const stations = new Map(
    passes.flatMap(({ weather }) => weather.overpass.map(({ station }) => [station.id, station.elevationM] as const)),
  );
  const elevations = [...stations.values()];
  return elevations.reduce((sum, elevation) => sum + elevation, 0) / elevations.length;
}

/** A raster that a run depends on; opened once here so that a wrong file stops the run before it starts. */
async function rasterInput(file: string): Promise<RasterInput> {
  const raster = await openRaster(await openFile(file));
  await raster.close();
  return { file, fingerprint: await fingerprintFile(file) };
}

async function readClasses(file: string): Promise<LandcoverClass[]> {
  const text = await readFile(file, 'utf8').catch((cause) => {
    throw new BasinloomError('RASTER_MISSING', { file }, { cause });
  });
  const rows = parse(text, { columns: true, trim: true, skip_empty_lines: true }) as Record<string, string>[];
  return rows.map((row, index) => {
    const code = Number(row.code);
    if (!Number.isInteger(code) || !row.name) {
      throw new BasinloomError('RASTER_CORRUPT', {
        file,
        place: `line ${index + 2}`,
        detail: 'a class needs a whole-number code and a name',
      });
    }
    return { code, name: row.name, agricultural: /^(1|true|yes)$/i.test(row.agricultural ?? '') };
  });
}
