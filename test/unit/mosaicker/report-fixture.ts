import { checkBounds, checkFluxOrder } from '../../../services/mosaicker/bounds-check.ts';
import { mapPng, mapStyle } from '../../../services/mosaicker/pictures.ts';
import type { MapFigure, MapOutline, PassReport, ReportModel } from '../../../services/mosaicker/report/model.ts';
import type { SeamKind, SeamRow } from '../../../services/mosaicker/tables/seams.ts';
import type { ZoneRow } from '../../../services/mosaicker/tables/zones.ts';
import type { AnchorRecord } from '../../../shared/contract/calibration.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import type { ProductName } from '../../../shared/contract/products.ts';

/** An invented basin: smooth hills, a river with irrigated land, clouds. All numbers are made up. */
const MONTHS = [
  ['2025-05', '2025-05-01', '2025-05-31', 96, 0.97],
  ['2025-06', '2025-06-01', '2025-06-30', 121, 0.91],
  ['2025-07', '2025-07-01', '2025-07-31', 134, 0.88],
  ['2025-08', '2025-08-01', '2025-08-31', 108, 0.71],
] as const;
const ZONES = [
  ['Upper Orrin', 312.4, 0.9],
  ['Lower Orrin', 418.9, 1.16],
  ['Tarn Beck', 167.2, 0.82],
  ['Saltmarsh', 88.5, 1.31],
] as const;
const CLASSES = [
  ['Irrigated crops', 0.31, 1.35],
  ['Rainfed crops', 0.22, 0.93],
  ['Grassland', 0.27, 0.86],
  ['Forest', 0.16, 0.98],
  ['Bare or built', 0.04, 0.35],
] as const;
const DATES = [
  '2025-05-09',
  '2025-05-18',
  '2025-06-03',
  '2025-06-12',
  '2025-07-05',
  '2025-07-14',
  '2025-08-06',
] as const;
const SIZE = { width: 420, height: 340 };

function zoneRows(basin: string, firstZone: string): ZoneRow[] {
  return MONTHS.flatMap(([period, from, to, depth, valid]) => {
    const row = (zone: string, kind: ZoneRow['zone_kind'], cover: string, area: number, factor: number): ZoneRow => {
      const covered = area * valid;
      const mean = depth * factor;
      return {
        zone,
        zone_kind: kind,
        land_cover: cover,
        period,
        from,
        to,
        area_km2: area,
        covered_area_km2: covered,
        valid_fraction: valid,
        et_mean_mm: mean,
        et_volume_m3: mean * covered * 1000,
        reference_et_mm: depth * 1.52,
        observations_mean: 2.7 * valid,
        longest_gap_days_max: Math.round(16 / valid),
        pixel_count: Math.round(area / 0.0009),
      };
    };
    const subBasins = ZONES.map(([name, area, factor], i) =>
      row(i === 0 ? firstZone : name, 'sub-basin', 'all', area, factor),
    );
    const area = ZONES.reduce((sum, [, zoneArea]) => sum + zoneArea, 0);
    const classes = CLASSES.map(([name, share, factor]) => row(basin, 'basin', name, area * share, factor));
    return [...subBasins, row(basin, 'basin', 'all', area, 1.04), ...classes];
  });
}

/** Distance to the basin's edge, negative outside. */
function shape(x: number, y: number): number {
  const angle = Math.atan2(y - 0.5, x - 0.5);
  return 0.42 + 0.05 * Math.sin(3 * angle) + 0.03 * Math.cos(5 * angle) - Math.hypot(x - 0.5, (y - 0.5) * 0.95);
}

function outlines(): MapOutline[] {
  const edge: string[] = [];
  for (let i = 0; i < 120; i++) {
    const angle = (i / 120) * 2 * Math.PI;
    let reach = 0.1;
    while (shape(0.5 + reach * Math.cos(angle), 0.5 + reach * Math.sin(angle)) > 0) reach += 0.002;
    const x = (0.5 + reach * Math.cos(angle)) * SIZE.width;
    const y = (0.5 + reach * Math.sin(angle)) * SIZE.height;
    edge.push(`${i === 0 ? 'M' : 'L'}${x.toFixed(1)} ${y.toFixed(1)}`);
  }
  return [
    { kind: 'zone', name: 'north and south', path: 'M34 160L150 180L250 150L380 190' },
    { kind: 'zone', name: 'east and west', path: 'M210 24L220 160L190 316' },
    { kind: 'boundary', name: 'basin', path: `${edge.join('')}Z` },
  ];
}

async function map(product: ProductName, when: string, level: number, cloud: number): Promise<MapFigure> {
  const { width, height } = SIZE;
  const values = new Float32Array(width * height);
  const inside = new Uint8Array(width * height);
  let sum = 0;
  let valid = 0;
  let total = 0;
  for (let i = 0; i < values.length; i++) {
    const x = (i % width) / width;
    const y = Math.floor(i / width) / height;
    if (shape(x, y) < 0) continue;
    inside[i] = 1;
    total++;
    const river = Math.exp(-(((y - 0.5 - 0.18 * Math.sin(5 * x)) / 0.07) ** 2));
    const fields = Math.sin(90 * x) * Math.sin(70 * y) > 0.1 ? 0.12 : 0;
    const clouds =
      Math.sin(7 * x + level) + Math.cos(9 * y - level * 3) + 0.5 * Math.sin(23 * x * y) > 1.6 - 1.6 * cloud;
    values[i] =
      clouds && cloud > 0 ? Number.NaN : level * (0.3 + 0.75 * river + fields + 0.15 * Math.sin(6 * x + 4 * y));
    if (!Number.isNaN(values[i])) {
      sum += values[i];
      valid++;
    }
  }
  const style = mapStyle(product, [0, product === 'et-period' ? 180 : product === 'et-day' ? 7.6 : 1.1]);
  const png = await mapPng({ width, height, values, inside, range: style.range, palette: style.palette });
  return {
    product,
    when,
    png,
    width,
    height,
    style,
    outlines: outlines(),
    metresPerPixel: 90,
    validFraction: valid / total,
    mean: sum / valid,
    ...(product === 'et-day' ? { passes: [`${when}-landsat8-p033`] } : {}),
  };
}

function anchor(role: 'hot' | 'cold', ndvi: number, kelvin: number): AnchorRecord {
  return {
    role,
    row: role === 'hot' ? 1204 : 877,
    column: role === 'hot' ? 655 : 1310,
    red: 0.09,
    nir: 0.31,
    ndvi,
    albedo: role === 'hot' ? 0.243 : 0.205,
    lst: kelvin + 0.6,
    datumTemperature: kelvin,
    elevationM: role === 'hot' ? 412 : 365,
    slopeEast: 0.004,
    slopeNorth: -0.002,
    longitudeDeg: 10.2513,
    latitudeDeg: 45.6127,
    lai: role === 'hot' ? 0.08 : 4.2,
    netRadiation: role === 'hot' ? 431.2 : 612.9,
    soilHeat: role === 'hot' ? 104.7 : 48.1,
    sensibleHeat: role === 'hot' ? 301.6 : -18.4,
    latentHeat: role === 'hot' ? 24.9 : 583.2,
    temperatureDifference: role === 'hot' ? 6.41 : -0.32,
    aerodynamicResistance: role === 'hot' ? 24.3 : 18.9,
    reason:
      role === 'hot'
        ? 'agricultural, slope 0.3°, NDVI below the 10th percentile (0.21), temperature above the 80th (313.4 K), neighbourhood even'
        : 'agricultural, slope 0.2°, NDVI above the 95th percentile (0.81), temperature below the 20th (297.1 K), neighbourhood even',
  };
}

function passes(): PassReport[] {
  return DATES.slice(0, 4).map((date, i) => {
    const columns = 40;
    const rows = 30;
    const counts = Array.from({ length: columns * rows }, (_, cell) => {
      const ndvi = (cell % columns) / columns;
      const warm = Math.floor(cell / columns) / rows;
      const density =
        Math.exp(-(((warm - 0.85 + 0.75 * ndvi) / 0.14) ** 2)) * (0.4 + Math.exp(-(((ndvi - 0.2) / 0.15) ** 2)));
      return density > 0.02 ? Math.round(4000 * density) : 0;
    });
    const passId = `${date}-landsat${i % 2 === 0 ? 8 : 9}-p033`;
    return {
      passId,
      satellite: i % 2 === 0 ? 'Landsat 8' : 'Landsat 9',
      date,
      acquired: `${date}T17:21:0${i}Z`,
      scenes: [
        `LC0${8 + (i % 2)}_L2SP_033033_${date.replaceAll('-', '')}_02_T1`,
        `LC0${8 + (i % 2)}_L2SP_033034_${date.replaceAll('-', '')}_02_T1`,
      ],
      anchors: i === 2 ? [] : [anchor('cold', 0.83, 296.2 + i), anchor('hot', 0.17, 315.8 + i)],
      slope: 0.3436,
      zeroTemperature: 297.13,
      ...(i === 2 ? { borrowedFrom: '2025-05-18-landsat9-p033' } : {}),
      hotCandidates: i === 2 ? 7 : 412,
      coldCandidates: 655,
      adjustment: { passId, gain: 1, offset: [0.0277, -0.053, 0.0252, 0][i], links: i === 3 ? 0 : 2 },
      scatter: {
        ndviStart: 0,
        ndviStep: 0.025,
        temperatureStartK: 292,
        temperatureStepK: 1,
        columns,
        rows,
        counts,
      },
    };
  });
}

function seams(): SeamRow[] {
  const row = (
    kind: SeamKind,
    seam: string,
    stage: 'before' | 'after',
    ratio: number,
    difference: number,
    limit?: number,
  ): SeamRow => ({
    when: '2025-06-12',
    variable: 'et-fraction',
    kind,
    seam,
    stage,
    count: 14210,
    mean_jump: 0.031 * ratio,
    mean_neighbour_jump: 0.031,
    ratio,
    ratio_ci_low: ratio * 0.93,
    ratio_ci_high: ratio * 1.08,
    mean_difference: difference,
    difference_ci_low: difference - 0.004,
    difference_ci_high: difference + 0.004,
    ...(limit === undefined ? {} : { limit, within_limit: Math.abs(difference) <= limit }),
  });
  return [
    row('tile-edge', 'column line 512', 'after', 1.002, 0.0004, 0.05),
    row('tile-edge', 'column line 1024', 'after', 0.99, -0.0002, 0.05),
    row('tile-edge', 'row line 512', 'after', 1.011, 0.0007, 0.05),
    row('scene-edge', 'rows 33|34 of pass 2025-06-12-landsat9-p033', 'after', 1.03, 0.0011, 0.05),
    row('pass-edge', '2025-06-12-landsat9-p033|2025-06-12-landsat8-p034', 'before', 3.4, 0.081, 0.05),
    row('pass-edge', '2025-06-12-landsat9-p033|2025-06-12-landsat8-p034', 'after', 1.4, 0.018, 0.05),
    row('pass-overlap', '2025-05-09-landsat8-p033|2025-05-18-landsat9-p033', 'before', 4.8, 0.112, 0.05),
    row('pass-overlap', '2025-05-09-landsat8-p033|2025-05-18-landsat9-p033', 'after', 2.6, 0.061, 0.05),
  ];
}

/** The fixture: a season of an invented basin, with every section filled. */
export async function fixtureModel(names: { basin?: string; zone?: string } = {}): Promise<ReportModel> {
  const basin = names.basin ?? 'Orrin basin';
  const regionPixels = 1096000;
  const flux = (mean: number, half: number, outOfBounds = 0) => ({
    count: 90000,
    minimum: mean - half,
    mean,
    maximum: mean + half,
    outOfBounds,
  });
  return {
    basin,
    from: '2025-05-01',
    to: '2025-08-31',
    status: 'complete-with-gaps',
    runId: '7c41f0de',
    method: 'metric',
    grid: { crs: 'laea:45.5,10.25', resolutionM: 30, rows: 1260, columns: 1560, tileSize: 512, tiles: 11 },
    minCoverage: 0.8,
    seamLimit: 0.05,
    zones: zoneRows(basin, names.zone ?? 'Upper Orrin'),
    periodMaps: [
      ...(await Promise.all(
        MONTHS.map(([period, , , depth, valid]) => map('et-period', period, depth * 0.95, 1 - valid)),
      )),
      await map('et-ratio', '2025-07', 0.92, 0.12),
    ],
    dayMaps: await Promise.all(
      DATES.map((date, i) => map('et-day', date, 4 + (i % 3), [0, 0.2, 0.1, 0.5, 0, 0.3, 0.7][i])),
    ),
    days: DATES.map((date, i) => ({
      date,
      passes: [`${date}-landsat8-p033`],
      regionPixels,
      usable: regionPixels * (1 - 0.09 * i),
      bits: { cloud: 80000 * i, 'cloud-shadow': 21000 * i, 'clipped-high': 312 + i, adjusted: regionPixels * 0.8 },
    })),
    periods: MONTHS.map(([period, from, to, , valid]) => ({
      period,
      from,
      to,
      regionPixels,
      usable: regionPixels * valid,
      observationsMean: 2.3,
      observationsMin: 0,
      observationsMax: 4,
      longestGapDaysMean: 14.2,
      longestGapDaysMax: 31,
      bits: { 'no-observation': regionPixels * (1 - valid), 'single-observation': 12000, adjusted: regionPixels * 0.8 },
    })),
    passes: passes(),
    adjustment: {
      parameters: 'offset',
      overlaps: [
        {
          first: '2025-05-09-landsat8-p033',
          second: '2025-05-18-landsat9-p033',
          pixels: 5000,
          daysApart: 9,
          meanFirst: 0.62,
          meanSecond: 0.7,
          before: -0.08,
          after: 0.0007,
        },
        {
          first: '2025-05-18-landsat9-p033',
          second: '2025-06-03-landsat8-p033',
          pixels: 2000,
          daysApart: 16,
          meanFirst: 0.55,
          meanSecond: 0.47,
          before: 0.08,
          after: 0.0019,
          cut: 'the dates are more than 10 days apart',
        },
        {
          first: '2025-06-03-landsat8-p033',
          second: '2025-06-12-landsat9-p033',
          pixels: 800,
          daysApart: 9,
          meanFirst: 0.6,
          meanSecond: 0.61,
          before: -0.01,
          after: -0.0074,
        },
      ],
      rmsBefore: 0.0752,
      rmsAfter: 0.0031,
      totals: MONTHS.map(([period, , , depth], i) => ({
        period,
        before: depth * 1.011e6 * (1 + 0.01 * (i - 1)),
        after: depth * 1.011e6,
      })),
    },
    seams: seams(),
    bounds: [
      ...checkBounds('et-day', { count: 90000, minimum: -0.1, mean: 4.2, maximum: 9.3, outOfBounds: 41 }, '2025-06-12'),
      ...checkBounds('et-day', { count: 96000, minimum: 0.2, mean: 5.1, maximum: 8.8, outOfBounds: 0 }, '2025-07-05'),
      ...checkBounds(
        'et-fraction',
        { count: 96000, minimum: 0, mean: 0.61, maximum: 1.12, outOfBounds: 0 },
        '2025-07-05',
      ),
      ...checkBounds('net-radiation', flux(560, 220), '2025-07-05'),
      ...checkBounds('sensible-heat', flux(140, 230), '2025-07-05'),
      ...checkBounds('et-period', { count: 99000, minimum: 4.2, mean: 118, maximum: 213, outOfBounds: 0 }, '2025-07'),
    ],
    fluxOrders: [
      checkFluxOrder('2025-07-05', {
        'net-radiation': flux(560, 220),
        'soil-heat': flux(80, 60),
        'sensible-heat': flux(140, 230),
        'latent-heat': flux(340, 280),
      }),
    ].filter((order) => order !== null),
    closures: [
      {
        name: 'Energy balance',
        meaning: 'Net radiation minus soil heat, sensible and latent heat, at each pixel',
        found: 3.1e-7,
        limit: 1e-6,
        unit: 'W m⁻²',
        within: true,
      },
      {
        name: 'Water volume',
        meaning: 'Sum of the sub-basin volumes against the basin volume',
        found: 2.2e-12,
        limit: 1e-9,
        unit: 'of the whole',
        within: true,
      },
    ],
    leftOut: [
      {
        kind: 'scene',
        id: 'LC08_L2SR_033033_20250721_02_T2',
        gap: false,
        error: new BasinloomError('SCENE_NO_THERMAL', {
          file: 'scenes/LC08_MTL.txt',
          place: 'TEMPERATURE_MULT_BAND_ST_B10',
        }).toRecord(),
      },
      {
        kind: 'pass',
        id: '2025-08-15-landsat9-p033',
        gap: true,
        error: new BasinloomError('PASS_ALL_CLOUD', { pass: '2025-08-15-landsat9-p033' }).toRecord(),
      },
    ],
    failures: [
      {
        stage: 'prepare',
        job: 'prepare-2025-08-06-landsat8-p033-r1-c2',
        attempts: 3,
        code: 'RASTER_TRUNCATED',
        message: 'scenes/B5.TIF: block 12: the file ends before its data',
        remedy: 'Download or copy the file again.',
      },
    ],
    parameters: [
      { key: 'grid.resolution', value: '30', isDefault: true },
      { key: 'method.use', value: 'metric', isDefault: false },
      { key: 'method.anchors.minCandidates', value: '20', isDefault: true },
      { key: 'checks.seamLimit', value: '0.05', isDefault: false },
    ],
    sources: [
      {
        kind: 'scene',
        name: 'LC08_L2SP_033033_20250509_02_T1',
        detail: '2025-05-09T17:21:00Z',
        fingerprint: 'b7f3a1c2d4e5f60718293a4b5c6d7e8f',
      },
      {
        kind: 'scene',
        name: 'LC09_L2SP_033033_20250518_02_T1',
        detail: '2025-05-18T17:21:01Z',
        fingerprint: '0d7e8fb7f3a1c2d4e5f60718293a4b5c',
      },
      { kind: 'weather', name: 'weather/stations.csv', detail: '3 stations, hourly' },
      { kind: 'terrain', name: 'dem.tif', fingerprint: '99aa00bb11cc22dd33ee44ff55006677' },
    ],
    versions: [
      { name: 'basinloom', version: '0.1.0' },
      { name: 'node', version: '24.21.0' },
    ],
  };
}
