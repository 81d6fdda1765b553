import { checkBounds, checkFluxOrder } from '../../../services/mosaicker/bounds-check.ts';
import type { ReportModel } from '../../../services/mosaicker/report/model.ts';
import type { ZoneRow } from '../../../services/mosaicker/tables/zones.ts';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { map } from './report-fixture-maps.ts';
import { passes } from './report-fixture-passes.ts';
import { seams } from './report-fixture-seams.ts';

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
    passes: passes(DATES.slice(0, 4)),
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
