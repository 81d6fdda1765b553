import { NDVI_BINS, ndviIndexOf, TEMPERATURE_BINS, temperatureIndexOf } from '../../shared/anchors/bins.ts';
import { selectAnchors } from '../../shared/anchors/select.ts';
import { createSummary, decodeSummary, mergeSummaries, type TileSummary } from '../../shared/anchors/summary.ts';
import type { AnchorCandidate, AnchorRecord, Calibration } from '../../shared/contract/calibration.ts';
import { BasinloomError } from '../../shared/contract/errors.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { PassEvidence } from '../../shared/contract/run-summary.ts';
import { type AnchorInput, calibrateLine } from '../../shared/flux/calibrate.ts';
import { buildLattice, FIELD_STEP, sampleLattice } from '../../shared/region/lattice.ts';
import { pixelToLonLat } from '../../shared/region/pixel-place.ts';
import { readArtefact } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';
import { daysBetween } from '../../shared/time/calendar.ts';
import { type FluxField, fluxField, passParameters } from '../../shared/weather/flux-field.ts';

/** Merges the summaries of a pass; the order of the keys cannot matter. */
export async function mergedSummary(keys: Iterable<string>, store: Store): Promise<TileSummary> {
  const merged = createSummary();
  for (const key of keys) {
    mergeSummaries(merged, decodeSummary(await readArtefact(store, key)));
  }
  return merged;
}

/**
 * Anchors and calibration of one pass from its merged summary.
 *
 * @throws BasinloomError PASS_ALL_CLOUD, PASS_NO_ANCHORS, PASS_CALIBRATION
 */
export function calibratePass(
  plan: Plan,
  passIndex: number,
  summary: TileSummary,
): { calibration: Calibration; evidence: PassEvidence } {
  const { pass, weather } = plan.passes[passIndex];
  const { method } = plan.basin;
  if (summary.usable === 0) throw new BasinloomError('PASS_ALL_CLOUD', { pass: pass.id });
  const { cold, hot, diagnostics } = inPass(pass.id, () => selectAnchors(summary, method.anchors));
  const { hotFraction, coldFraction } = method.anchors;
  const chosen = [...cold, ...hot];
  const fieldAt = fieldSampler(plan, passIndex);
  const inputs = chosen.map((candidate) => anchorInput(candidate, fieldAt(candidate)));
  const line = inPass(pass.id, () =>
    calibrateLine(method.use[0], inputs.slice(0, cold.length), inputs.slice(cold.length), {
      ...passParameters(plan, passIndex),
      coldFraction,
      hotFraction: hotFraction === 'water-balance' ? weather.bareSoilFraction : hotFraction,
    }),
  );
  const anchors = line.anchors.map((solved, index): AnchorRecord => {
    const candidate = chosen[index];
    const [longitudeDeg, latitudeDeg] = pixelToLonLat(plan.grid, candidate.row + 0.5, candidate.column + 0.5);
    return { ...candidate, ...solved, role: index < cold.length ? 'cold' : 'hot', longitudeDeg, latitudeDeg };
  });
  const calibration: Calibration = {
    passId: pass.id,
    method: method.use[0],
    slope: line.slope,
    zeroTemperature: line.zeroTemperature,
    zeroAboveAir: line.zeroTemperature - airAtDatum(plan, inputs),
    slopeSd: line.slopeSd,
    zeroTemperatureSd: line.zeroTemperatureSd,
    anchors,
  };
  const evidence = {
    ...passEvidence(pass.id, summary),
    coldCandidates: diagnostics.cold.subgroupPixels,
    hotCandidates: diagnostics.hot.subgroupPixels,
  };
  return { calibration, evidence };
}

/** Bins of a summary joined into one cell of the picture of NDVI against temperature. */
const SCATTER_BINS = 4;

/** What the anchors of a pass are chosen from, as the report shows it. */
export function passEvidence(passId: string, summary: TileSummary): PassEvidence {
  const columns = NDVI_BINS.count / SCATTER_BINS;
  const rows = TEMPERATURE_BINS.count / SCATTER_BINS;
  const counts = new Array<number>(columns * rows).fill(0);
  for (const [bin, count] of summary.bins) {
    const column = Math.floor(ndviIndexOf(bin) / SCATTER_BINS);
    counts[Math.floor(temperatureIndexOf(bin) / SCATTER_BINS) * columns + column] += count;
  }
  const scatter = {
    ndviStart: NDVI_BINS.from,
    ndviStep: SCATTER_BINS / NDVI_BINS.perUnit,
    temperatureStartK: TEMPERATURE_BINS.from,
    temperatureStepK: SCATTER_BINS / TEMPERATURE_BINS.perUnit,
    columns,
    rows,
    counts,
  };
  return { passId, usable: summary.usable, scatter };
}

/**
 * The calibration of the nearest pass in time on the same path, carried to this pass: the slope as it is, the zero
 * as far above the air as it was there.
 *
 * @returns null when no calibrated pass lies within `borrowMaxDays`
 */
export function borrowCalibration(
  plan: Plan,
  passIndex: number,
  calibrated: readonly { readonly pass: number; readonly calibration: Calibration }[],
): Calibration | null {
  const { pass } = plan.passes[passIndex];
  const distance = (other: number) => Math.abs(daysBetween(pass.date, plan.passes[other].pass.date));
  const lenders = calibrated
    .filter(({ pass: other }) => plan.passes[other].pass.path === pass.path)
    .filter(({ pass: other }) => distance(other) <= plan.basin.method.anchors.borrowMaxDays)
    .sort((a, b) => distance(a.pass) - distance(b.pass) || (a.calibration.passId < b.calibration.passId ? -1 : 1));
  const lender = lenders[0]?.calibration;
  if (!lender) return null;
  return {
    ...lender,
    passId: pass.id,
    zeroTemperature: airAtDatum(plan, lender.anchors.map(fieldSampler(plan, passIndex))) + lender.zeroAboveAir,
    borrowedFrom: lender.passId,
  };
}

/** Mean air temperature over some pixels, carried to the datum elevation, K. */
function airAtDatum(plan: Plan, places: readonly { readonly airTemperatureDatum: number }[]): number {
  const lapse = plan.basin.method.lapseRateKPerM * plan.datumElevationM;
  return places.reduce((sum, { airTemperatureDatum }) => sum + (airTemperatureDatum - lapse), 0) / places.length;
}

type SmoothField = Record<FluxField['variables'][number], number>;

function anchorInput(candidate: AnchorCandidate, field: SmoothField): AnchorInput {
  const { red, nir, albedo, lst, elevationM: elevation, slopeEast, slopeNorth } = candidate;
  return { red, nir, albedo, lst, elevation, slopeEast, slopeNorth, ...field };
}

/** Smooth fields of a pass at single pixels, from the same global nodes that the flux jobs use. */
function fieldSampler(plan: Plan, passIndex: number): (place: { row: number; column: number }) => SmoothField {
  const { variables, evaluate } = fluxField(plan, passIndex);
  return ({ row, column }) => {
    const lattice = buildLattice({ row, column, rows: 1, columns: 1 }, FIELD_STEP, variables.length, evaluate);
    const entries = variables.map((name, index) => [name, sampleLattice(lattice, index, row, column)] as const);
    return Object.fromEntries(entries) as SmoothField;
  };
}

/** Errors of the pure folders do not know their pass: it is added here. */
function inPass<T>(pass: string, work: () => T): T {
  try {
    return work();
  } catch (error) {
    if (error instanceof BasinloomError)
      throw new BasinloomError(error.code, { ...error.parameters, pass }, { cause: error });
    throw error;
  }
}
