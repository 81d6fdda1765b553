import type { AnchorCandidate } from '../contract/calibration.ts';
import { BasinloomError } from '../contract/errors.ts';
import { binOf, stratumOf } from './bins.ts';
import { createSummary, keepLowest, type TileSummary } from './tile-summary.ts';

/*
 * Layout, little-endian: magic "ASM1"; float64 usable, covered; uint32 number of bins, number of candidates;
 * bins in ascending order (uint32 bin, float64 count); candidates by stratum, then hash (int32 row, column,
 * nine float32). Equal summaries give equal bytes.
 */
const MAGIC = 0x314d5341;
const HEADER_BYTES = 28;
const BIN_BYTES = 12;
const CANDIDATE_BYTES = 44;

const FIELDS = [
  'red',
  'nir',
  'ndvi',
  'albedo',
  'lst',
  'datumTemperature',
  'elevationM',
  'slopeEast',
  'slopeNorth',
] as const satisfies readonly (keyof AnchorCandidate)[];

const byKey = <T>(a: readonly [number, T], b: readonly [number, T]): number => a[0] - b[0];

/** The summary as bytes; the same summary gives the same bytes, however it was merged. */
export function encodeSummary(summary: TileSummary): Uint8Array {
  const bins = [...summary.bins].sort(byKey);
  const candidates = [...summary.strata].sort(byKey).flatMap(([, kept]) => kept);
  const bytes = new Uint8Array(HEADER_BYTES + bins.length * BIN_BYTES + candidates.length * CANDIDATE_BYTES);
  const view = new DataView(bytes.buffer);
  view.setUint32(0, MAGIC, true);
  view.setFloat64(4, summary.usable, true);
  view.setFloat64(12, summary.covered, true);
  view.setUint32(20, bins.length, true);
  view.setUint32(24, candidates.length, true);
  let at = HEADER_BYTES;
  for (const [bin, count] of bins) {
    view.setUint32(at, bin, true);
    view.setFloat64(at + 4, count, true);
    at += BIN_BYTES;
  }
  for (const candidate of candidates) {
    writeCandidate(view, at, candidate);
    at += CANDIDATE_BYTES;
  }
  return bytes;
}

/**
 * Inverse of `encodeSummary`.
 *
 * @throws ARTEFACT_CORRUPT when the bytes are not a whole summary.
 */
export function decodeSummary(bytes: Uint8Array): TileSummary {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
  if (bytes.length < HEADER_BYTES || view.getUint32(0, true) !== MAGIC) throw damaged('not an anchor summary');
  const bins = view.getUint32(20, true);
  const candidates = view.getUint32(24, true);
  if (bytes.length !== HEADER_BYTES + bins * BIN_BYTES + candidates * CANDIDATE_BYTES) throw damaged('wrong length');

  const summary = createSummary();
  summary.usable = view.getFloat64(4, true);
  summary.covered = view.getFloat64(12, true);
  let at = HEADER_BYTES;
  for (let i = 0; i < bins; i += 1, at += BIN_BYTES) {
    summary.bins.set(view.getUint32(at, true), view.getFloat64(at + 4, true));
  }
  for (let i = 0; i < candidates; i += 1, at += CANDIDATE_BYTES) {
    const candidate = readCandidate(view, at);
    const bin = binOf(candidate.ndvi, candidate.datumTemperature);
    if (bin < 0) throw damaged('a candidate lies outside the bins');
    keepLowest(summary, stratumOf(bin), candidate);
  }
  return summary;
}

const damaged = (detail: string): BasinloomError =>
  new BasinloomError('ARTEFACT_CORRUPT', { key: 'anchor summary', detail });

function writeCandidate(view: DataView, at: number, candidate: AnchorCandidate): void {
  view.setInt32(at, candidate.row, true);
  view.setInt32(at + 4, candidate.column, true);
  FIELDS.forEach((field, i) => {
    view.setFloat32(at + 8 + 4 * i, candidate[field], true);
  });
}

function readCandidate(view: DataView, at: number): AnchorCandidate {
  const [red, nir, ndvi, albedo, lst, datumTemperature, elevationM, slopeEast, slopeNorth] = FIELDS.map((_, i) =>
    view.getFloat32(at + 8 + 4 * i, true),
  ) as [number, number, number, number, number, number, number, number, number];
  return {
    row: view.getInt32(at, true),
    column: view.getInt32(at + 4, true),
    red,
    nir,
    ndvi,
    albedo,
    lst,
    datumTemperature,
    elevationM,
    slopeEast,
    slopeNorth,
  };
}
