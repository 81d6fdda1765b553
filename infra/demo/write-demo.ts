import { mkdir, readdir, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { PERIOD } from './calendar.ts';
import { CloudField } from './clouds.ts';
import { contaminationOf } from './contamination.ts';
import { writeElevation, writeLandcover, writeOutlines, writeTruthMaps } from './map-files.ts';
import type { DemoOptions } from './options.ts';
import { makeOutline } from './outline.ts';
import { makeOverpass, type Overpass } from './overpass.ts';
import { PASSES, SWATHS } from './passes.ts';
import { tabulateResistance } from './resistance.ts';
import { sceneId, writeScene } from './scene-files.ts';
import { sceneGrid } from './scene-grid.ts';
import { sceneGround } from './scene-ground.ts';
import { sceneImage } from './scene-image.ts';
import { sunAngles } from './sun.ts';
import { type DemoTruth, loadTruth, TRUTH_FILE } from './truth.ts';
import { writeWeather } from './weather-files.ts';
import { makeWorld, type World } from './world.ts';
import { integrateTruth, type TruthMaps } from './zone-truth.ts';

export type { CalibrationError, DemoOptions, DemoSize } from './options.ts';
export { CENTRE_LATITUDE, CENTRE_LONGITUDE } from './plane.ts';
export {
  compareTruth,
  type DemoTruth,
  loadTruth,
  type TruthComparison,
  truthAt,
  truthMap,
  truthZoneVolumes,
} from './truth.ts';

const NAME = 'Orrin';
/** Folders that belong to the demo alone. */
const OWN_FOLDERS = ['scenes', 'weather', 'truth'] as const;

/**
 * Writes an invented basin: scenes, weather, elevation, land cover, outlines, a basin file, and its truth. The same
 * options give the same bytes. A folder that already holds this very basin is left as it is.
 *
 * The surface temperatures come from a known field of ET by a forward energy balance that shares no code with the
 * product, so a run on the basin can be judged.
 *
 * @param folder is made; an older demo in it is replaced
 * @throws Error when the folder holds scenes that are not of a demo
 */
export async function writeDemo(folder: string, options: DemoOptions = {}): Promise<DemoTruth> {
  const { seed = 1, size = 'demo', calibrationError } = options;
  const wanted = { seed, size, ...(calibrationError && { calibrationError }) };
  const present = await loadTruth(folder).catch(() => null);
  if (present && isSame(present, wanted)) return present;
  await clear(folder, present !== null);

  const world = makeWorld(seed, size);
  const { boundary, subBasins } = makeOutline(seed * 1000, world.scale);
  await writeOutlines(folder, NAME, boundary, subBasins);
  await writeElevation(folder, world);
  await writeLandcover(folder, world);
  await writeWeather(join(folder, 'weather'), world);
  await writeFile(join(folder, 'basin.yaml'), basinFile(world.scale.tile));
  const contamination = await writeScenes(join(folder, 'scenes'), world, calibrationError);
  const maps = integrateTruth(
    world,
    subBasins,
    PASSES.map(({ date }) => date),
  );
  await writeTruthMaps(join(folder, 'truth'), maps);
  const truth: DemoTruth = {
    format: 1,
    name: NAME,
    ...wanted,
    period: { from: PERIOD.from, to: PERIOD.to },
    passes: passTruths(maps, contamination),
    zones: maps.zones,
  };
  // Last of all: who finds it finds a whole basin.
  await writeFile(join(folder, TRUTH_FILE), `${JSON.stringify(truth, null, 2)}\n`);
  return truth;
}

function isSame(truth: DemoTruth, wanted: DemoOptions): boolean {
  const key = ({ seed, size, calibrationError }: DemoOptions) => JSON.stringify([seed, size, calibrationError ?? null]);
  return truth.format === 1 && key(truth) === key(wanted);
}

async function clear(folder: string, ours: boolean): Promise<void> {
  const entries = await readdir(folder).catch((): string[] => []);
  if (!ours && entries.includes('scenes')) {
    throw new Error(`${folder} already holds a folder "scenes" that is not of a demo; give another folder`);
  }
  for (const name of OWN_FOLDERS) {
    if (ours) await rm(join(folder, name), { recursive: true, force: true });
    await mkdir(join(folder, name), { recursive: true });
  }
}

/** All scenes. @returns contamination of each pass, K */
async function writeScenes(
  folder: string,
  world: World,
  calibrationError: DemoOptions['calibrationError'],
): Promise<ReadonlyMap<string, number>> {
  const resistance = tabulateResistance();
  const contamination = new Map<string, number>();
  // The files of one scene are compressed while the next scene is computed.
  let writing: Promise<void> = Promise.resolve();
  for (const swath of SWATHS) {
    const passes = PASSES.filter((pass) => pass.swath === swath);
    const grids = swath.rows.map((_, rowIndex) => sceneGrid(swath, rowIndex, world.scale));
    for (const [rowIndex, grid] of grids.entries()) {
      const ground = sceneGround(world, swath, rowIndex, grid);
      for (const pass of passes) {
        const overpass = makeOverpass(world, pass, grids);
        const warming = contaminationOf(calibrationError, overpass, resistance);
        contamination.set(pass.date, warming);
        const image = sceneImage({
          scale: world.scale,
          seed: world.seed,
          ground,
          overpass,
          stands: world.stands(pass.day),
          clouds: new CloudField(world.seed, pass, world.scale, world.land.parcels.list, shadowOf(world, overpass)),
          resistance,
          contamination: warming,
        });
        await writing;
        writing = writeScene(folder, overpass, rowIndex, ground, image);
      }
    }
  }
  await writing;
  return contamination;
}

/** Height of the clouds, in half heights of the basin, and at most this, m. */
const CLOUD_HEIGHT = 0.12;
const HIGHEST_CLOUD = 1500;

/** From a cloud to its shadow, m east and north: away from the sun. */
function shadowOf({ scale }: World, { sun }: Overpass): [number, number] {
  const { elevation, azimuth } = sunAngles(sun, 12, 41);
  const reach = Math.min(HIGHEST_CLOUD, CLOUD_HEIGHT * scale.halfHeight) / Math.tan((elevation * Math.PI) / 180);
  const direction = (azimuth * Math.PI) / 180;
  return [-reach * Math.sin(direction), -reach * Math.cos(direction)];
}

function passTruths({ means }: TruthMaps, contamination: ReadonlyMap<string, number>) {
  return PASSES.map((pass) => ({
    date: pass.date,
    path: pass.swath.path,
    satellite: pass.swath.satellite,
    scenes: pass.swath.rows.map((_, rowIndex) => sceneId(pass, rowIndex)),
    etMeanMm: means.get(pass.date) as number,
    contaminationK: contamination.get(pass.date) ?? 0,
  }));
}

function basinFile(tile: number): string {
  return `# An invented basin. Nothing in it is a real place; its true evapotranspiration is in truth/.
region: { name: ${NAME}, boundary: basin.geojson, zones: subbasins.geojson, zoneName: name }
grid: { crs: equal-area, resolution: 30, tile: ${tile} }
period: { from: ${PERIOD.from}, to: ${PERIOD.to}, step: month }
scenes: [{ source: landsat-level-2, path: scenes }]
weather: [{ source: station-csv, path: weather/stations.csv }]
terrain: dem.tif
landcover: { path: landcover.tif, classes: landcover.csv }
method: { use: [metric] }
store: ./out
`;
}
