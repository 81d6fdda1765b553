import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import proj4 from 'proj4';
import type { GridSpec } from '../../shared/contract/grid.ts';
import { dayOf, MONTHS, PERIOD } from './calendar.ts';
import { type EtField, etAt, etField, termsAt } from './et-field.ts';
import { emptyPlace } from './land.ts';
import type { CalibrationError, DemoSize } from './options.ts';
import { toPlane } from './plane.ts';
import { planeCoordinates } from './plane-raster.ts';
import { TERMS } from './reference-surface.ts';
import { makeWorld, type World } from './world.ts';

/** Where the truth of a demo lies below its folder. */
export const TRUTH_FILE = 'truth/truth.json';

export interface ZoneTruth {
  readonly name: string;
  readonly areaM2: number;
  /** By period: "2025-06", "2025-07", and "whole". */
  readonly periods: Readonly<Record<string, { readonly etMeanMm: number; readonly volumeM3: number }>>;
}

export interface PassTruth {
  readonly date: string;
  readonly path: number;
  readonly satellite: string;
  readonly scenes: readonly string[];
  /** Mean over the basin of the true ET of the day, mm. */
  readonly etMeanMm: number;
  /** Wrong warming of the land that anchors are taken from, K; 0 but in the pass that was spoiled. */
  readonly contaminationK: number;
}

/** What is known of an invented basin. With seed and size the whole world can be made again. */
export interface DemoTruth {
  readonly format: 1;
  readonly name: string;
  readonly seed: number;
  readonly size: DemoSize;
  readonly calibrationError?: CalibrationError;
  readonly period: { readonly from: string; readonly to: string };
  readonly passes: readonly PassTruth[];
  readonly zones: readonly ZoneTruth[];
}

/** How a map of ET differs from the truth. */
export interface TruthComparison {
  /** Pixels compared: those with a number. */
  readonly count: number;
  readonly meanTruthMm: number;
  readonly meanEstimateMm: number;
  /** Estimate minus truth, mm, and in percent of the mean truth. */
  readonly bias: number;
  readonly biasPct: number;
  /** mm. */
  readonly rmse: number;
  readonly correlation: number;
}

/** Reads the truth of a demo basin. */
export async function loadTruth(folder: string): Promise<DemoTruth> {
  return JSON.parse(await readFile(join(folder, TRUTH_FILE), 'utf8')) as DemoTruth;
}

/**
 * True ET of a place, mm.
 *
 * @param when a date (YYYY-MM-DD), a month of the period (YYYY-MM), or "from_to" or "whole" for the period
 */
export function truthAt(truth: DemoTruth, longitude: number, latitude: number, when: string): number {
  const world = worldOf(truth);
  const [x, y] = toPlane(longitude, latitude);
  const terms = new Float64Array(TERMS);
  termsAt(world, x, y, terms);
  return etAt(fieldOf(truth, when), world.land.placeAt(x, y, emptyPlace()), terms);
}

/**
 * Compares a map of ET with the truth at its pixel centres. Mixed pixels on field edges take part; NaN does not.
 *
 * @param etMm rows x columns of the grid, mm
 * @param include which pixels take part; default all
 */
export function compareTruth(
  truth: DemoTruth,
  grid: Pick<GridSpec, 'crs' | 'originX' | 'originY' | 'resolution' | 'rows' | 'columns'>,
  when: string,
  etMm: ArrayLike<number>,
  include: (index: number) => boolean = () => true,
): TruthComparison {
  const expected = truthMap(truth, grid, when);
  let [count, sumTruth, sumEstimate, squares] = [0, 0, 0, 0];
  let [truthSquares, estimateSquares, products] = [0, 0, 0];
  for (let at = 0; at < expected.length; at++) {
    const estimate = etMm[at];
    if (Number.isNaN(estimate) || !include(at)) continue;
    const known = expected[at];
    count++;
    sumTruth += known;
    sumEstimate += estimate;
    squares += (estimate - known) ** 2;
    truthSquares += known * known;
    estimateSquares += estimate * estimate;
    products += known * estimate;
  }
  const meanTruthMm = sumTruth / count;
  const meanEstimateMm = sumEstimate / count;
  const spread = Math.sqrt((truthSquares / count - meanTruthMm ** 2) * (estimateSquares / count - meanEstimateMm ** 2));
  return {
    count,
    meanTruthMm,
    meanEstimateMm,
    bias: meanEstimateMm - meanTruthMm,
    biasPct: (100 * (meanEstimateMm - meanTruthMm)) / meanTruthMm,
    rmse: Math.sqrt(squares / count),
    correlation: (products / count - meanTruthMm * meanEstimateMm) / spread,
  };
}

/** True ET at every pixel centre of a grid, mm, row by row. */
export function truthMap(
  truth: DemoTruth,
  grid: Pick<GridSpec, 'crs' | 'originX' | 'originY' | 'resolution' | 'rows' | 'columns'>,
  when: string,
): Float32Array {
  const world = worldOf(truth);
  const field = fieldOf(truth, when);
  const { originX: left, originY: top, resolution: pixel, rows: height, columns: width } = grid;
  const { inverse } = proj4(grid.crs.proj4);
  const { x, y } = planeCoordinates({ left, top, pixel, width, height }, (point) => inverse(point) as number[]);
  const out = new Float32Array(x.length);
  const place = emptyPlace();
  const terms = new Float64Array(TERMS);
  for (let at = 0; at < out.length; at++) {
    termsAt(world, x[at], y[at], terms);
    out[at] = etAt(field, world.land.placeAt(x[at], y[at], place), terms);
  }
  return out;
}

/** True volume of every sub-basin, m3. @param period as in `truthAt`, default the whole period */
export function truthZoneVolumes(
  truth: DemoTruth,
  period = 'whole',
): { name: string; areaM2: number; etMeanMm: number; volumeM3: number }[] {
  const id = period.includes('_') ? 'whole' : period;
  return truth.zones.map(({ name, areaM2, periods }) => {
    if (!periods[id]) throw new RangeError(`the truth knows no period "${period}"`);
    return { name, areaM2, ...periods[id] };
  });
}

/** Days that a date or a period stands for. */
export function daysOf(when: string): number[] {
  if (/^\d{4}-\d{2}-\d{2}$/.test(when)) return [dayOf(when)];
  const days = (first: number, count: number) => Array.from({ length: count }, (_, k) => first + k);
  const month = MONTHS.find(({ id }) => id === when);
  if (month) return days(month.firstDay, month.days);
  if (when === 'whole' || when === `${PERIOD.from}_${PERIOD.to}`) return days(0, PERIOD.days);
  throw new RangeError(`the truth knows no date or period "${when}"`);
}

const worlds = new Map<string, { world: World; fields: Map<string, EtField> }>();

function known({ seed, size }: DemoTruth): { world: World; fields: Map<string, EtField> } {
  const key = `${size} ${seed}`;
  const found = worlds.get(key) ?? { world: makeWorld(seed, size), fields: new Map() };
  worlds.set(key, found);
  return found;
}

function worldOf(truth: DemoTruth): World {
  return known(truth).world;
}

function fieldOf(truth: DemoTruth, when: string): EtField {
  const { world, fields } = known(truth);
  const field = fields.get(when) ?? etField(world, daysOf(when));
  fields.set(when, field);
  return field;
}
