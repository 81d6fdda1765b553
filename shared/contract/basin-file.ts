import { z } from 'zod';
import { PRODUCT_NAMES } from './products.ts';

/**
 * The basin file: the one schema behind validation, `basinloom schema` and docs/reference/basin-file.md.
 * Every default stands here and nowhere else. Units are in the names where they are not SI.
 */
const isoDate = z.string().regex(/^\d{4}-\d{2}-\d{2}$/, 'must be a date YYYY-MM-DD');
const positive = z.number().positive();
const fraction = z.number().min(0).max(1);

const region = z.strictObject({
  name: z.string().min(1).describe('Name of the basin, used in titles'),
  boundary: z.string().describe('GeoJSON file (RFC 7946) of the basin polygon or polygons'),
  zones: z.string().optional().describe('GeoJSON file of zones (sub-basins) for the tables'),
  zoneName: z.string().default('name').describe('Property of a zone feature that names it'),
});

const grid = z
  .strictObject({
    crs: z
      .union([z.literal('equal-area'), z.string().regex(/^EPSG:\d+$/), z.number().int().positive()])
      .default('equal-area')
      .describe('"equal-area" (centred on the basin) or an EPSG code of a projected system in metres'),
    resolution: positive.default(30).describe('Pixel size, m'),
    tile: z
      .union([z.literal(128), z.literal(256), z.literal(512), z.literal(1024)])
      .default(512)
      .describe('Tile edge, pixels; it never changes a value'),
  })
  .prefault({});

const period = z
  .strictObject({
    from: isoDate.describe('First day, included'),
    to: isoDate.describe('Last day, included'),
    step: z.enum(['month', 'whole']).default('month').describe('Accounting step'),
  })
  .refine((value) => value.from <= value.to, { error: 'period.from must not be after period.to', path: ['from'] });

const sceneSource = z.strictObject({
  source: z.literal('landsat-level-2').describe('Landsat Collection 2 Level-2 with surface temperature'),
  path: z.string().describe('Folder searched for MTL files, at any depth'),
});

const weatherSource = z.strictObject({
  source: z.literal('station-csv').describe('Station list with hourly and daily tables'),
  path: z.string().describe('The station list (see docs/reference/weather.md)'),
});

const landcover = z.strictObject({
  path: z.string().describe('GeoTIFF of class codes'),
  classes: z.string().describe('CSV: code,name,agricultural'),
});

const anchors = z
  .strictObject({
    coldNdviPercentile: z
      .number()
      .min(50)
      .max(100)
      .default(95)
      .describe('Cold anchors come from pixels at or above this percentile of NDVI'),
    coldTemperaturePercentile: z
      .number()
      .min(0)
      .max(50)
      .default(20)
      .describe('... and of those from this coldest share, %'),
    hotNdviPercentile: z
      .number()
      .min(0)
      .max(50)
      .default(10)
      .describe('Hot anchors come from pixels at or below this percentile of NDVI'),
    hotTemperaturePercentile: z
      .number()
      .min(50)
      .max(100)
      .default(80)
      .describe('... and of those from above this percentile of temperature'),
    minCandidates: z.number().int().min(1).default(20).describe('Fewest pixels behind each anchor'),
    maxSlopeDeg: z.number().min(0).max(90).default(3).describe('Steepest slope of an anchor, degrees'),
    minColdNdvi: z
      .number()
      .min(0)
      .max(1)
      .default(0.7)
      .describe('Least mean NDVI of the cold anchors: a coldFraction near 1.05 holds for full cover only'),
    maxReliefM: positive.default(500).describe('Largest height difference to the median of the region, m'),
    homogeneity: z
      .strictObject({
        maxNdviSd: positive.default(0.04).describe('Of NDVI'),
        maxTemperatureSdK: positive.default(0.7).describe('Of surface temperature, K'),
      })
      .prefault({})
      .describe('Largest standard deviation in the 3 x 3 neighbourhood'),
    coldFraction: z.number().min(0.5).max(1.3).default(1.05).describe('ETrF at the cold anchor (METRIC)'),
    hotFraction: z
      .union([z.literal('water-balance'), z.number().min(0).max(0.5)])
      .default('water-balance')
      .describe('ETrF at the hot anchor (METRIC): from the rain record, or a number'),
    onFailure: z.enum(['borrow', 'set-aside']).default('borrow').describe('What a pass without enough anchors does'),
    borrowMaxDays: z
      .number()
      .int()
      .min(1)
      .default(48)
      .describe('Farthest pass of the same path that a calibration is borrowed from, days'),
  })
  .prefault({});

const adjust = z
  .strictObject({
    use: z.boolean().default(true).describe('Adjust passes to one another in their overlaps'),
    parameters: z.enum(['offset', 'offset-and-gain']).default('offset').describe('What is found for each pass'),
    maxGapDays: z.number().int().min(0).default(10).describe('Longest time between two passes that are compared'),
    maxRainMm: z.number().min(0).default(3).describe('More rain than this between the two dates cuts the link, mm'),
    minPixels: z.number().int().min(1).default(500).describe('Fewest stable pixels of an overlap'),
    anchorUncertainty: positive
      .default(0.05)
      .describe('1 sigma of a pass calibration, fraction; holds the adjustment back'),
  })
  .prefault({});

const method = z
  .strictObject({
    use: z
      .array(z.enum(['metric', 'sebal']))
      .min(1)
      .max(1)
      .default(['metric'])
      .describe('The energy balance method'),
    anchors,
    adjust,
    lapseRateKPerM: z.number().min(0).max(0.02).default(0.0065).describe('Lapse of the datum temperature, K/m'),
    longwaveTemperature: z
      .enum(['air', 'surface'])
      .default('air')
      .describe('Temperature in the downwelling longwave term'),
    turbidity: z.number().min(0.5).max(1).default(1).describe('Kt of the clear-sky transmissivity, 1 clean air'),
    bareSoil: z
      .strictObject({
        totalEvaporableWaterMm: positive.default(22).describe('TEW, mm'),
        readilyEvaporableWaterMm: positive.default(9).describe('REW, mm; less than TEW'),
      })
      .refine((layer) => layer.readilyEvaporableWaterMm < layer.totalEvaporableWaterMm, {
        error: 'readilyEvaporableWaterMm must be less than totalEvaporableWaterMm',
      })
      .prefault({})
      .describe('Surface layer of the hot anchor water balance (FAO-56 table 19)'),
  })
  .prefault({});

const integrate = z
  .strictObject({
    maxGapDays: z.number().int().min(1).default(40).describe('Longest gap between overpasses that is interpolated'),
    maxHoldDays: z.number().int().min(0).default(20).describe('Longest hold before the first or after the last'),
  })
  .prefault({});

const checks = z
  .strictObject({
    seamLimit: positive.default(0.05).describe('Largest mean fraction difference across a pass edge'),
    minCoverage: fraction.default(0.8).describe('Least valid share of the region in a period'),
  })
  .prefault({});

export const basinFileSchema = z.strictObject({
  region,
  grid,
  period,
  scenes: z.array(sceneSource).min(1),
  weather: z.array(weatherSource).length(1),
  terrain: z.string().optional().describe('GeoTIFF of elevation, m; without it the land is taken as flat'),
  elevation: z.number().default(0).describe('Elevation used where no terrain is given, m'),
  landcover: landcover.optional(),
  method,
  integrate,
  products: z
    .array(z.enum(PRODUCT_NAMES))
    .min(1)
    .default(['et-day', 'et-fraction', 'et-period', 'et-ratio'])
    .describe('What to publish; quality, observations and longest gap always are'),
  compression: z.enum(['deflate', 'zstd']).default('deflate').describe('Compression of the products'),
  checks,
  store: z.string().default('./out').describe('Folder of the output, or s3://bucket/prefix'),
  engine: z
    .union([
      z.literal('embedded'),
      z.string().regex(/^rediss?:\/\/[^@\s]+$/, 'must be "embedded" or redis://host:port without a password'),
    ])
    .default('embedded')
    .describe(
      'Where the jobs run: "embedded" on threads of this process, or on the workers of the Redis at redis://host:port (user and password from BASINLOOM_REDIS_USERNAME and BASINLOOM_REDIS_PASSWORD)',
    ),
  threads: z
    .number()
    .int()
    .min(1)
    .max(256)
    .optional()
    .describe('Worker threads of the embedded engine; default: all processors'),
});

/** The basin file after validation: every default filled in. Paths are still as written. */
export type BasinFile = z.output<typeof basinFileSchema>;
