import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { binOf, ndviEdge, ndviIndexOf, temperatureEdge, temperatureIndexOf } from '../../../shared/anchors/bins.ts';
import {
  addCandidate,
  CANDIDATES_PER_STRATUM,
  comparePixels,
  createSummary,
  decodeSummary,
  encodeSummary,
  mergeSummaries,
  summariseTile,
  type TileSummary,
} from '../../../shared/anchors/summary.ts';
import type { AnchorCandidate } from '../../../shared/contract/calibration.ts';
import { DAY_QUALITY } from '../../../shared/contract/quality.ts';
import { cropAll, fieldPass, grow, summariseWindow, tilesOf } from './planes.ts';
import { seeded } from './random.ts';

const INNER = { row: 40, column: 1000, rows: 48, columns: 40 };
const WHOLE = grow(INNER, 2);
const PLANES = fieldPass(WHOLE, { seed: 1 });

const candidate = (row: number, column: number, more: Partial<AnchorCandidate> = {}): AnchorCandidate => ({
  row,
  column,
  red: 0.05,
  nir: 0.45,
  ndvi: 0.8,
  albedo: 0.2,
  lst: 300,
  datumTemperature: 300,
  elevationM: 10,
  slopeEast: 0,
  slopeNorth: 0,
  ...more,
});

const countOf = (summary: TileSummary): number => [...summary.bins.values()].reduce((sum, count) => sum + count, 0);

describe('merging', () => {
  const whole = summariseWindow(PLANES, WHOLE, INNER);

  it('gives the same bytes for every tile size and merge order', () => {
    expect(countOf(whole)).toBeGreaterThan(200);
    fc.assert(
      fc.property(fc.integer({ min: 3, max: 50 }), fc.integer(), (tileSize, seed) => {
        const random = seeded(seed);
        const parts = tilesOf(INNER, tileSize).map((tile) => summariseWindow(PLANES, WHOLE, tile));
        // merge two random parts until one is left
        while (parts.length > 1) {
          const [one] = parts.splice(Math.floor(random() * parts.length), 1);
          const at = Math.floor(random() * parts.length);
          parts[at] = mergeSummaries(parts[at], one);
        }
        expect(encodeSummary(parts[0])).toEqual(encodeSummary(whole));
      }),
      { numRuns: 25 },
    );
  });

  it('leaves the other summary as it was', () => {
    const other = summariseWindow(PLANES, WHOLE, tilesOf(INNER, 20)[0]);
    const before = encodeSummary(other);
    const into = createSummary();
    mergeSummaries(into, other);
    mergeSummaries(into, summariseWindow(PLANES, WHOLE, tilesOf(INNER, 20)[1]));
    expect(encodeSummary(other)).toEqual(before);
  });

  it('has the empty summary as its neutral element', () => {
    expect(encodeSummary(mergeSummaries(createSummary(), whole))).toEqual(encodeSummary(whole));
  });
});

describe('candidates', () => {
  it('are the three of lowest hash in their stratum', () => {
    const summary = createSummary();
    const all: AnchorCandidate[] = [];
    for (let i = 0; i < 200; i += 1) all.push(candidate(i % 7, i * 31));
    for (const each of all) addCandidate(summary, each);
    const lowest = all.sort(comparePixels).slice(0, CANDIDATES_PER_STRATUM);
    const [kept] = [...summary.strata.values()];
    expect(kept.map(({ row, column }) => [row, column])).toEqual(lowest.map(({ row, column }) => [row, column]));
    expect(countOf(summary)).toBe(200);
  });

  it('are the same from planes and one by one', () => {
    const eligible = new Uint8Array(INNER.rows * INNER.columns).fill(1);
    const planes = { ...cropAll(PLANES, WHOLE, INNER), eligible };
    const summary = createSummary();
    for (let at = 0; at < eligible.length; at += 1) {
      addCandidate(summary, {
        row: INNER.row + Math.floor(at / INNER.columns),
        column: INNER.column + (at % INNER.columns),
        red: planes.red[at],
        nir: planes.nir[at],
        ndvi: planes.ndvi[at],
        albedo: planes.albedo[at],
        lst: planes.lst[at],
        datumTemperature: planes.datumTemperature[at],
        elevationM: planes.elevation[at],
        slopeEast: planes.slopeEast[at],
        slopeNorth: planes.slopeNorth[at],
      });
    }
    const fromPlanes = summariseTile(planes, INNER);
    expect(fromPlanes.usable).toBe(eligible.length);
    summary.usable = fromPlanes.usable;
    summary.covered = fromPlanes.covered;
    expect(encodeSummary(fromPlanes)).toEqual(encodeSummary(summary));
  });

  it('with a missing or impossible value are not counted', () => {
    const summary = createSummary();
    addCandidate(summary, candidate(1, 1, { albedo: Number.NaN }));
    addCandidate(summary, candidate(1, 2, { ndvi: Number.NaN }));
    addCandidate(summary, candidate(1, 3, { datumTemperature: 351 }));
    addCandidate(summary, candidate(1, 4, { datumTemperature: Number.NEGATIVE_INFINITY }));
    expect(countOf(summary)).toBe(0);
    addCandidate(summary, candidate(1, 5));
    expect(countOf(summary)).toBe(1);
  });
});

it('coverage counts follow the quality bits', () => {
  const eligible = new Uint8Array(4);
  const plane = () => new Float32Array(4).fill(0.5);
  const floats = { ndvi: plane(), red: plane(), nir: plane(), albedo: plane(), lst: plane(), elevation: plane() };
  const quality = Uint16Array.of(0, DAY_QUALITY.cloud, DAY_QUALITY.noScene, DAY_QUALITY.water);
  const summary = summariseTile(
    { ...floats, datumTemperature: plane(), slopeEast: plane(), slopeNorth: plane(), eligible, quality },
    { row: 0, column: 0, rows: 2, columns: 2 },
  );
  expect([summary.covered, summary.usable]).toEqual([3, 2]);
});

describe('encoding', () => {
  const bytes = encodeSummary(summariseWindow(PLANES, WHOLE, INNER));

  it('comes back as it was', () => {
    expect(encodeSummary(decodeSummary(bytes))).toEqual(bytes);
    // and from the middle of a larger buffer
    const shifted = new Uint8Array(bytes.length + 3);
    shifted.set(bytes, 3);
    expect(encodeSummary(decodeSummary(shifted.subarray(3)))).toEqual(bytes);
  });

  it('refuses damaged bytes', () => {
    for (const damaged of [bytes.subarray(0, 10), bytes.subarray(0, bytes.length - 1), bytes.toReversed()]) {
      expect(() => decodeSummary(damaged)).toThrow(expect.objectContaining({ code: 'ARTEFACT_CORRUPT' }));
    }
  });
});

it('a bin holds the values between its edges', () => {
  const value = { min: -0.2, max: 1, noNaN: true };
  fc.assert(
    fc.property(fc.double(value), fc.double({ min: 230, max: 350, noNaN: true }), (ndvi, temperature) => {
      const bin = binOf(ndvi, temperature);
      const [i, j] = [ndviIndexOf(bin), temperatureIndexOf(bin)];
      expect(ndvi).toBeGreaterThanOrEqual(ndviEdge(i) - 1e-12);
      expect(ndvi).toBeLessThanOrEqual(ndviEdge(i + 1) + 1e-12);
      expect(temperature).toBeGreaterThanOrEqual(temperatureEdge(j));
      expect(temperature).toBeLessThanOrEqual(temperatureEdge(j + 1));
    }),
  );
  expect(binOf(1, 350)).toBe(120 * 480 - 1);
  expect(binOf(-0.2, 230)).toBe(0);
  expect(binOf(1.01, 300)).toBe(-1);
});
