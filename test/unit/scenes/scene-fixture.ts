import { mkdir, mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll } from 'vitest';
import { type TinyTiff, tinyTiff } from './tiny-tiff.ts';

export type MtlTree = Record<string, Record<string, string>>;
export type Sensor = 'OLI_TIRS' | 'ETM' | 'TM';

export const FIXTURE_SIZE = 48;

const SPACECRAFT = { OLI_TIRS: 'LANDSAT_8', ETM: 'LANDSAT_7', TM: 'LANDSAT_5' } as const;
const PREFIX = { OLI_TIRS: 'LC08', ETM: 'LE07', TM: 'LT05' } as const;

export interface FixtureOptions {
  readonly sensor?: Sensor;
  readonly row?: number;
  /** YYYYMMDD. */
  readonly processed?: string;
  readonly tier?: string;
  readonly time?: string;
  /** Stored value of a band ("SR_B4", "ST_B10", "QA_PIXEL", "QA_RADSAT") at a pixel. */
  readonly dn?: (band: string, row: number, column: number) => number;
}

/** Names of the band files of a sensor, without the scene's name. */
export function bandsOf(sensor: Sensor): string[] {
  const numbers = sensor === 'OLI_TIRS' ? [2, 3, 4, 5, 6, 7] : [1, 2, 3, 4, 5, 7];
  return [...numbers.map((n) => `SR_B${n}`), sensor === 'OLI_TIRS' ? 'ST_B10' : 'ST_B6', 'QA_PIXEL', 'QA_RADSAT'];
}

export function fixtureId({
  sensor = 'OLI_TIRS',
  row = 30,
  processed = '20250620',
  tier = 'T1',
}: FixtureOptions): string {
  return `${PREFIX[sensor]}_L2SP_198${String(row).padStart(3, '0')}_20250612_${processed}_02_${tier}`;
}

/** The groups of an MTL file that are read, with the values that USGS delivers. */
export function mtlTree(options: FixtureOptions = {}): MtlTree {
  const { sensor = 'OLI_TIRS', row = 30, time = '10:12:30.1234560Z' } = options;
  const id = fixtureId(options);
  const bands = bandsOf(sensor);
  const reflectance = bands.filter((band) => band.startsWith('SR_B')).map((band) => band.slice(4));
  const thermal = bands.find((band) => band.startsWith('ST_')) ?? '';
  return {
    PRODUCT_CONTENTS: {
      LANDSAT_PRODUCT_ID: id,
      PROCESSING_LEVEL: 'L2SP',
      ...Object.fromEntries(reflectance.map((n) => [`FILE_NAME_BAND_${n}`, `${id}_SR_B${n}.TIF`])),
      [`FILE_NAME_BAND_${thermal}`]: `${id}_${thermal}.TIF`,
      FILE_NAME_QUALITY_L1_PIXEL: `${id}_QA_PIXEL.TIF`,
      FILE_NAME_QUALITY_L1_RADIOMETRIC_SATURATION: `${id}_QA_RADSAT.TIF`,
    },
    IMAGE_ATTRIBUTES: {
      SPACECRAFT_ID: SPACECRAFT[sensor],
      SENSOR_ID: sensor,
      WRS_PATH: '198',
      WRS_ROW: String(row),
      DATE_ACQUIRED: '2025-06-12',
      SCENE_CENTER_TIME: time,
      CLOUD_COVER: '12.50',
      SUN_AZIMUTH: '136.31696044',
      SUN_ELEVATION: '57.08727307',
      EARTH_SUN_DISTANCE: '1.0155332',
    },
    LEVEL2_SURFACE_REFLECTANCE_PARAMETERS: Object.fromEntries(
      reflectance.flatMap((n) => [
        [`REFLECTANCE_MULT_BAND_${n}`, '2.75e-05'],
        [`REFLECTANCE_ADD_BAND_${n}`, '-0.2'],
      ]),
    ),
    LEVEL2_SURFACE_TEMPERATURE_PARAMETERS: {
      [`TEMPERATURE_MULT_BAND_${thermal}`]: '0.00341802',
      [`TEMPERATURE_ADD_BAND_${thermal}`]: '149.0',
    },
    // The Level-1 record repeats keys with other values.
    LEVEL1_RADIOMETRIC_RESCALING: { REFLECTANCE_MULT_BAND_4: '2.0000E-05', REFLECTANCE_ADD_BAND_4: '-0.100000' },
  };
}

export function mtlText(tree: MtlTree): string {
  const lines = Object.entries(tree).flatMap(([group, values]) => [
    `  GROUP = ${group}`,
    ...Object.entries(values).map(([key, value]) => `    ${key} = ${/^[-\d.eE]+$/.test(value) ? value : `"${value}"`}`),
    `  END_GROUP = ${group}`,
  ]);
  return ['GROUP = LANDSAT_METADATA_FILE', ...lines, 'END_GROUP = LANDSAT_METADATA_FILE', 'END', ''].join('\n');
}

export function mtlJson(tree: MtlTree): string {
  return JSON.stringify({ LANDSAT_METADATA_FILE: tree });
}

export function mtlXml(tree: MtlTree): string {
  const groups = Object.entries(tree).map(([group, values]) => {
    const inner = Object.entries(values).map(([key, value]) => `    <${key}>${value}</${key}>`);
    return [`  <${group}>`, ...inner, `  </${group}>`].join('\n');
  });
  return `<?xml version="1.0" encoding="UTF-8"?>\n<LANDSAT_METADATA_FILE>\n${groups.join('\n')}\n</LANDSAT_METADATA_FILE>\n`;
}

/** Clear land: reflectance with a gradient, 300 K and up. */
export function clearDn(band: string, row: number, column: number): number {
  if (band === 'QA_PIXEL') return 21824;
  if (band === 'QA_RADSAT') return 0;
  if (band.startsWith('ST_')) return 44177 + 7 * row + 3 * column;
  return 9000 + 900 * Number(band.slice(4)) + 11 * row + 5 * column;
}

export function bandTiff(band: string, options: FixtureOptions = {}, changes: Partial<TinyTiff> = {}): Buffer {
  const size = FIXTURE_SIZE;
  const dn = options.dn ?? clearDn;
  const values = Uint16Array.from({ length: size * size }, (_, i) => dn(band, Math.floor(i / size), i % size));
  const grid = { width: size, height: size, originX: 500010, originY: 4900020, pixel: 30, epsg: 32632 };
  return tinyTiff({ ...grid, values, ...changes });
}

/** Writes a whole scene with its MTL as text. @returns path of the MTL file */
export async function writeScene(
  folder: string,
  options: FixtureOptions = {},
  tree = mtlTree(options),
): Promise<string> {
  const id = fixtureId(options);
  await mkdir(folder, { recursive: true });
  for (const band of bandsOf(options.sensor ?? 'OLI_TIRS')) {
    await writeFile(join(folder, `${id}_${band}.TIF`), bandTiff(band, options));
  }
  const file = join(folder, `${id}_MTL.txt`);
  await writeFile(file, mtlText(tree));
  return file;
}

/** A folder for each call, removed when the tests of the file are over. */
export function temporaryFolders(): () => Promise<string> {
  const made: string[] = [];
  afterAll(() => Promise.all(made.map((folder) => rm(folder, { recursive: true, force: true }))));
  return async () => {
    const folder = await mkdtemp(join(tmpdir(), 'scenes-'));
    made.push(folder);
    return folder;
  };
}
