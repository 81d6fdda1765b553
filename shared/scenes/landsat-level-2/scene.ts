import { createHash } from 'node:crypto';
import { dirname, join } from 'node:path';
import { BasinloomError } from '../../contract/errors.ts';
import type { BandFile, BandRole, RasterGeoreference, ReflectanceRole, SceneRecord } from '../../contract/scene.ts';
import { formatInstant, parseInstant } from '../../time/calendar.ts';
import { inspectBand, requireSameGrid } from './band-file.ts';
import { type Mtl, readMtl } from './mtl.ts';
import { SENSORS, type SensorBands } from './sensors.ts';

const CONTENTS = 'PRODUCT_CONTENTS';
const IMAGE = 'IMAGE_ATTRIBUTES';
const REFLECTANCE = 'LEVEL2_SURFACE_REFLECTANCE_PARAMETERS';
const TEMPERATURE = 'LEVEL2_SURFACE_TEMPERATURE_PARAMETERS';

/** DN of no data in the surface bands (USGS LSDS-1618, LSDS-1619). */
const SURFACE_FILL = 0;
/** QA_PIXEL of a pixel without data: bit 0 alone. */
const QA_PIXEL_FILL = 1;
/** QA_RADSAT has no value for "no data". */
const NO_FILL = -1;

/**
 * Reads one Collection 2 Level-2 scene from its MTL file: metadata, scaling of every band, and the common grid from
 * the headers of the band files. No pixel is read. The record does not depend on the form of the MTL file.
 *
 * @throws BasinloomError SCENE_METADATA, SCENE_NO_THERMAL, SCENE_BAND_MISSING, SCENE_GRID_MISMATCH, and RASTER_* for a
 *   band file that cannot be used
 */
export async function readScene(metadataFile: string, signal?: AbortSignal): Promise<SceneRecord> {
  const mtl = await readMtl(metadataFile);
  const id = mtl.text(CONTENTS, 'LANDSAT_PRODUCT_ID');
  const sensor = sensorOf(mtl);
  requireTemperature(mtl, sensor);
  const described = describeBands(mtl, sensor);
  const bands: Partial<Record<BandRole, BandFile>> = {};
  let first: { file: string; georeference: RasterGeoreference } | undefined;
  for (const { role, ...band } of described) {
    signal?.throwIfAborted();
    const { fingerprint, georeference } = await inspectBand(band.file, role, id);
    first ??= { file: band.file, georeference };
    requireSameGrid(id, first.georeference, band.file, georeference);
    bands[role] = { ...band, fingerprint };
  }
  const scene = {
    id,
    source: 'landsat-level-2' as const,
    satellite: mtl.text(IMAGE, 'SPACECRAFT_ID'),
    albedoModel: sensor.model,
    path: mtl.numberWithin(IMAGE, 'WRS_PATH', 1, 251),
    row: mtl.numberWithin(IMAGE, 'WRS_ROW', 1, 248),
    acquired: acquiredAt(mtl),
    sunElevationDeg: mtl.numberWithin(IMAGE, 'SUN_ELEVATION', -90, 90),
    sunAzimuthDeg: mtl.numberWithin(IMAGE, 'SUN_AZIMUTH', -360, 360),
    earthSunDistanceAu: mtl.numberWithin(IMAGE, 'EARTH_SUN_DISTANCE', 0.98, 1.02),
    ...cloudCover(mtl),
    georeference: first!.georeference,
    bands: bands as Record<BandRole, BandFile>,
  };
  return { ...scene, metadataFile, fingerprint: identityOf(scene) };
}

function sensorOf(mtl: Mtl): SensorBands {
  const level = mtl.text(CONTENTS, 'PROCESSING_LEVEL');
  if (!level.startsWith('L2')) throw mtl.problem(CONTENTS, 'PROCESSING_LEVEL', `"${level}" is not a Level-2 product`);
  const name = mtl.text(IMAGE, 'SENSOR_ID');
  if (!Object.hasOwn(SENSORS, name)) throw mtl.problem(IMAGE, 'SENSOR_ID', `sensor "${name}" is not supported`);
  return SENSORS[name];
}

/** Scenes without surface temperature (L2SR, or made from OLI alone) lack the group or the band's scaling. */
function requireTemperature(mtl: Mtl, { temperature }: SensorBands): void {
  for (const key of [`TEMPERATURE_MULT_BAND_${temperature}`, `TEMPERATURE_ADD_BAND_${temperature}`]) {
    if (mtl.find(TEMPERATURE, key) === undefined) {
      throw new BasinloomError('SCENE_NO_THERMAL', { file: mtl.file, place: `${TEMPERATURE}/${key}` });
    }
  }
}

type DescribedBand = Omit<BandFile, 'fingerprint'> & { readonly role: BandRole };

/** Files and scaling as the MTL file gives them; band files lie beside it. */
function describeBands(mtl: Mtl, sensor: SensorBands): DescribedBand[] {
  const named = (key: string) => {
    const name = mtl.text(CONTENTS, key);
    // A delivery must not make a run read what lies elsewhere.
    if (/[/\\]|^\.\.?$/.test(name)) throw mtl.problem(CONTENTS, key, `"${name}" is not a plain file name`);
    return join(dirname(mtl.file), name);
  };
  const surface = (role: BandRole, group: string, quantity: string, band: string | number): DescribedBand => ({
    role,
    file: named(`FILE_NAME_BAND_${band}`),
    scale: mtl.number(group, `${quantity}_MULT_BAND_${band}`),
    offset: mtl.number(group, `${quantity}_ADD_BAND_${band}`),
    fill: SURFACE_FILL,
  });
  const flags = (role: BandRole, key: string, fill: number): DescribedBand => ({
    role,
    file: named(key),
    scale: 1,
    offset: 0,
    fill,
  });
  const reflectance = Object.entries(sensor.reflectance) as [ReflectanceRole, number][];
  return [
    ...reflectance.map(([role, band]) => surface(role, REFLECTANCE, 'REFLECTANCE', band)),
    surface('surface-temperature', TEMPERATURE, 'TEMPERATURE', sensor.temperature),
    flags('qa-pixel', 'FILE_NAME_QUALITY_L1_PIXEL', QA_PIXEL_FILL),
    flags('qa-radsat', 'FILE_NAME_QUALITY_L1_RADIOMETRIC_SATURATION', NO_FILL),
  ];
}

function acquiredAt(mtl: Mtl): string {
  const date = mtl.text(IMAGE, 'DATE_ACQUIRED');
  const time = mtl.text(IMAGE, 'SCENE_CENTER_TIME');
  try {
    return formatInstant(parseInstant(`${date}T${time}`));
  } catch (error) {
    throw mtl.problem(IMAGE, 'SCENE_CENTER_TIME', (error as Error).message, error);
  }
}

/** Percent; -1 stands for "not found out" and is left out. */
function cloudCover(mtl: Mtl): { cloudCoverPct?: number } {
  if (mtl.find(IMAGE, 'CLOUD_COVER') === undefined) return {};
  const cloudCoverPct = mtl.numberWithin(IMAGE, 'CLOUD_COVER', -1, 100);
  return cloudCoverPct < 0 ? {} : { cloudCoverPct };
}

/** Hash of all that decides what the scene's pixels are worth; not of where its files lie. */
function identityOf(scene: Omit<SceneRecord, 'metadataFile' | 'fingerprint'>): string {
  const bands = Object.entries(scene.bands).map(([role, { file, ...rest }]) => ({ role, ...rest }));
  return createHash('sha256')
    .update(JSON.stringify({ ...scene, bands }))
    .digest('hex')
    .slice(0, 32);
}
