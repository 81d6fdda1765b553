import type { Pass } from './passes.ts';

/** Metadata of a scene as groups of keys. A string is quoted in the text form, a bare token is not. */
type Value = { readonly text: string; readonly quoted: boolean };
type Groups = readonly (readonly [group: string, entries: readonly (readonly [key: string, value: Value])[]])[];

export interface SceneFacts {
  readonly id: string;
  readonly pass: Pass;
  readonly row: number;
  /** ISO 8601 UTC of the scene's centre. */
  readonly acquired: string;
  readonly sunElevation: number;
  readonly sunAzimuth: number;
  readonly earthSunDistance: number;
  readonly cloudCover: number;
  readonly utmZone: number;
  readonly width: number;
  readonly height: number;
  /** Centre of the first pixel, m, as the metadata have it. */
  readonly cornerX: number;
  readonly cornerY: number;
}

export type MtlForm = 'json' | 'txt' | 'xml';

/** Band numbers, blue to second shortwave infrared, and the thermal band. */
export const BANDS = {
  oli: { reflective: [2, 3, 4, 5, 6, 7], thermal: 'ST_B10' },
  tm: { reflective: [1, 2, 3, 4, 5, 7], thermal: 'ST_B6' },
} as const;

const word = (text: string): Value => ({ text, quoted: true });
const bare = (text: string | number): Value => ({ text: String(text), quoted: false });

/** The metadata file of a Collection 2 Level-2 scene in one of its three forms. */
export function mtlText(facts: SceneFacts, form: MtlForm): string {
  const groups = groupsOf(facts);
  switch (form) {
    case 'json':
      return `${JSON.stringify({
        LANDSAT_METADATA_FILE: Object.fromEntries(
          groups.map(([group, entries]) => [
            group,
            Object.fromEntries(entries.map(([key, value]) => [key, value.text])),
          ]),
        ),
      })}\n`;
    case 'xml':
      return [
        '<?xml version="1.0" encoding="UTF-8"?>',
        '<LANDSAT_METADATA_FILE>',
        ...groups.flatMap(([group, entries]) => [
          `  <${group}>`,
          ...entries.map(([key, value]) => `    <${key}>${value.text}</${key}>`),
          `  </${group}>`,
        ]),
        '</LANDSAT_METADATA_FILE>\n',
      ].join('\n');
    default:
      return [
        'GROUP = LANDSAT_METADATA_FILE',
        ...groups.flatMap(([group, entries]) => [
          `  GROUP = ${group}`,
          ...entries.map(([key, { text, quoted }]) => `    ${key} = ${quoted ? `"${text}"` : text}`),
          `  END_GROUP = ${group}`,
        ]),
        'END_GROUP = LANDSAT_METADATA_FILE',
        'END\n',
      ].join('\n');
  }
}

function groupsOf(facts: SceneFacts): Groups {
  const { id, pass } = facts;
  const { sensor } = pass.swath;
  const { reflective, thermal } = BANDS[sensor];
  const levelOne = id.replace('_L2SP_', '_L1TP_');
  const forBands = (key: string, value: (band: number) => Value) =>
    reflective.map((band) => [`${key}_BAND_${band}`, value(band)] as const);
  return [
    [
      'PRODUCT_CONTENTS',
      [
        ['ORIGIN', word('Invented scene of the Orrin demo basin; not a satellite product')],
        ['LANDSAT_PRODUCT_ID', word(id)],
        ['PROCESSING_LEVEL', word('L2SP')],
        ['COLLECTION_NUMBER', bare('02')],
        ['COLLECTION_CATEGORY', word('T1')],
        ['OUTPUT_FORMAT', word('GEOTIFF')],
        ...forBands('FILE_NAME', (band) => word(`${id}_SR_B${band}.TIF`)),
        [`FILE_NAME_BAND_${thermal}`, word(`${id}_${thermal}.TIF`)],
        ['FILE_NAME_QUALITY_L1_PIXEL', word(`${id}_QA_PIXEL.TIF`)],
        ['FILE_NAME_QUALITY_L1_RADIOMETRIC_SATURATION', word(`${id}_QA_RADSAT.TIF`)],
      ],
    ],
    ['IMAGE_ATTRIBUTES', attributes(facts)],
    ['PROJECTION_ATTRIBUTES', projectionAttributes(facts)],
    [
      'LEVEL2_SURFACE_REFLECTANCE_PARAMETERS',
      [...forBands('REFLECTANCE_MULT', () => bare('2.75e-05')), ...forBands('REFLECTANCE_ADD', () => bare('-0.2'))],
    ],
    [
      'LEVEL2_SURFACE_TEMPERATURE_PARAMETERS',
      [
        [`TEMPERATURE_MULT_BAND_${thermal}`, bare('0.00341802')],
        [`TEMPERATURE_ADD_BAND_${thermal}`, bare('149.0')],
      ],
    ],
    // The files also tell of the Level-1 product they come from, under the same keys with other values.
    [
      'LEVEL1_PROCESSING_RECORD',
      [
        ['LANDSAT_PRODUCT_ID', word(levelOne)],
        ['PROCESSING_LEVEL', word('L1TP')],
        ...forBands('FILE_NAME', (band) => word(`${levelOne}_B${band}.TIF`)),
        ['FILE_NAME_QUALITY_L1_PIXEL', word(`${levelOne}_QA_PIXEL.TIF`)],
      ],
    ],
    [
      'LEVEL1_RADIOMETRIC_RESCALING',
      [...forBands('REFLECTANCE_MULT', () => bare('2.0000E-05')), ...forBands('REFLECTANCE_ADD', () => bare('-0.1'))],
    ],
  ];
}

function attributes(facts: SceneFacts): Groups[number][1] {
  const { pass, row, acquired } = facts;
  const { satellite, sensor, path } = pass.swath;
  return [
    ['SPACECRAFT_ID', word(satellite)],
    ['SENSOR_ID', word(sensor === 'oli' ? 'OLI_TIRS' : 'ETM')],
    ['WRS_TYPE', bare(2)],
    ['WRS_PATH', bare(path)],
    ['WRS_ROW', bare(row)],
    ['DATE_ACQUIRED', bare(acquired.slice(0, 10))],
    ['SCENE_CENTER_TIME', word(`${acquired.slice(11, 23)}0000Z`)],
    ['CLOUD_COVER', bare(facts.cloudCover.toFixed(2))],
    ['SUN_AZIMUTH', bare(facts.sunAzimuth.toFixed(8))],
    ['SUN_ELEVATION', bare(facts.sunElevation.toFixed(8))],
    ['EARTH_SUN_DISTANCE', bare(facts.earthSunDistance.toFixed(7))],
  ];
}

function projectionAttributes(facts: SceneFacts): Groups[number][1] {
  const { cornerX, cornerY, width, height } = facts;
  return [
    ['MAP_PROJECTION', word('UTM')],
    ['DATUM', word('WGS84')],
    ['ELLIPSOID', word('WGS84')],
    ['UTM_ZONE', bare(facts.utmZone)],
    ['GRID_CELL_SIZE_REFLECTIVE', bare('30.00')],
    ['GRID_CELL_SIZE_THERMAL', bare('30.00')],
    ['REFLECTIVE_LINES', bare(height)],
    ['REFLECTIVE_SAMPLES', bare(width)],
    ['ORIENTATION', word('NORTH_UP')],
    ['CORNER_UL_PROJECTION_X_PRODUCT', bare(cornerX.toFixed(3))],
    ['CORNER_UL_PROJECTION_Y_PRODUCT', bare(cornerY.toFixed(3))],
    ['CORNER_LR_PROJECTION_X_PRODUCT', bare((cornerX + (width - 1) * 30).toFixed(3))],
    ['CORNER_LR_PROJECTION_Y_PRODUCT', bare((cornerY - (height - 1) * 30).toFixed(3))],
  ];
}
