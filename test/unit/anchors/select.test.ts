import { describe, expect, it } from 'vitest';
import { neighbourhoodMean } from '../../../shared/anchors/eligible.ts';
import { MAX_ANCHORS, selectAnchors } from '../../../shared/anchors/select.ts';
import {
  addCandidate,
  createSummary,
  encodeSummary,
  mergeSummaries,
  type TileSummary,
} from '../../../shared/anchors/summary.ts';
import { basinFileSchema } from '../../../shared/contract/basin-file.ts';
import { fieldPass, grow, summariseWindow, tilesOf } from './planes.ts';
import { normal, seeded } from './random.ts';

const OPTIONS = basinFileSchema.shape.method.parse({}).anchors;

const INNER = { row: 100, column: 200, rows: 160, columns: 160 };
const WHOLE = grow(INNER, 2);
const PLANES = fieldPass(WHOLE, { seed: 11, noiseK: 0.1 });

function add(summary: TileSummary, row: number, column: number, ndvi: number, temperature: number): void {
  addCandidate(summary, {
    row,
    column,
    red: 0.1,
    nir: 0.3,
    ndvi,
    albedo: 0.2,
    lst: temperature,
    datumTemperature: temperature,
    elevationM: 0,
    slopeEast: 0,
    slopeNorth: 0,
  });
}

/** 20 000 pixels: NDVI evenly from 0.1 to 0.9, temperature 320 - 25 (NDVI - 0.1) K plus noise of 1 K. */
function evenSummary(seed: number): TileSummary {
  const random = seeded(seed);
  const gauss = normal(random);
  const summary = createSummary();
  for (let i = 0; i < 20_000; i += 1) {
    const ndvi = 0.1 + 0.8 * random();
    add(summary, Math.floor(i / 200), i % 200, ndvi, 320 - 25 * (ndvi - 0.1) + gauss());
  }
  return summary;
}

describe('selection from a made-up pass', () => {
  const whole = selectAnchors(summariseWindow(PLANES, WHOLE, INNER), OPTIONS);

  it('finds the cool green and the warm bare end', () => {
    expect(whole.cold.length).toBeGreaterThanOrEqual(5);
    expect(whole.hot.length).toBeGreaterThanOrEqual(5);
    for (const { ndvi, datumTemperature } of whole.cold) {
      expect(ndvi).toBeGreaterThan(0.84);
      expect(datumTemperature).toBeLessThan(300);
    }
    for (const { ndvi, datumTemperature } of whole.hot) {
      expect(ndvi).toBeLessThan(0.2);
      expect(datumTemperature).toBeGreaterThan(318);
    }
  });

  it.each([16, 37, 64])('does not know the tile size (%i)', (tileSize) => {
    const tiles = tilesOf(INNER, tileSize).map((tile) => summariseWindow(PLANES, WHOLE, tile));
    const forwards = tiles.reduce(mergeSummaries, createSummary());
    const backwards = tiles.reduceRight(mergeSummaries, createSummary());
    expect(encodeSummary(forwards)).toEqual(encodeSummary(backwards));
    expect(selectAnchors(forwards, OPTIONS)).toEqual(whole);
    expect(selectAnchors(backwards, OPTIONS)).toEqual(whole);
  });
});

describe('thresholds', () => {
  it('cut off the asked shares', () => {
    const { diagnostics } = selectAnchors(evenSummary(2), OPTIONS);
    const { cold, hot } = diagnostics;
    expect(diagnostics.eligible).toBe(20_000);
    // an even spread over 0.1 to 0.9 has its top 5 % above 0.86 and its lowest 10 % below 0.18
    expect(Math.abs(cold.ndviThreshold - 0.86)).toBeLessThan(0.011);
    expect(Math.abs(hot.ndviThreshold - 0.18)).toBeLessThan(0.011);
    // at least the share, and by less than one more bin
    const shares = [
      [cold.groupPixels / 20_000, 0.05, 0.0125],
      [hot.groupPixels / 20_000, 0.1, 0.0125],
      [cold.subgroupPixels / (cold.groupPixels - cold.droppedPixels), 0.2, 0.1],
      [hot.subgroupPixels / (hot.groupPixels - hot.droppedPixels), 0.2, 0.1],
    ];
    for (const [found, share, bin] of shares) {
      expect(found).toBeGreaterThanOrEqual(share);
      expect(found).toBeLessThan(share + 1.2 * bin);
    }
  });

  it('stand in the reason of each anchor, which obeys them', () => {
    const { cold, hot, diagnostics } = selectAnchors(evenSummary(2), OPTIONS);
    for (const [anchors, group, sign] of [
      [cold, diagnostics.cold, 1],
      [hot, diagnostics.hot, -1],
    ] as const) {
      for (const { ndvi, datumTemperature, reason } of anchors) {
        expect(sign * (ndvi - group.ndviThreshold)).toBeGreaterThanOrEqual(-1e-6);
        expect(sign * (datumTemperature - group.temperatureThreshold)).toBeLessThanOrEqual(1e-6);
        expect(Math.abs(datumTemperature - group.medianTemperature)).toBeLessThanOrEqual(group.withinK);
        expect(reason).toContain(group.ndviThreshold.toFixed(2));
        expect(reason).toContain(group.temperatureThreshold.toFixed(2));
        expect(reason).toContain(String(group.subgroupPixels));
      }
    }
  });

  it('of exact shares take no bin too many', () => {
    // 100 pixels in bins of their own; the top 5 % are exactly the five highest
    const summary = createSummary();
    for (let i = 0; i < 100; i += 1) add(summary, 0, i, 0.005 + 0.0099 * i, 320 - 0.2 * i);
    expect(selectAnchors(summary, { ...OPTIONS, minCandidates: 1 }).diagnostics.cold.groupPixels).toBe(5);
  });

  it('never keep more than the cap', () => {
    const summary = createSummary();
    // cold strata all over NDVI 0.3 to 1 at one temperature
    for (let i = 0; i < 5000; i += 1) add(summary, 1, i, 0.3 + (0.7 * i) / 5000, 300);
    for (let i = 0; i < 5000; i += 1) add(summary, 2, i, 0.01 + (0.2 * i) / 5000, 320);
    const { cold, diagnostics } = selectAnchors(summary, { ...OPTIONS, coldNdviPercentile: 50, minColdNdvi: 0 });
    expect(diagnostics.cold.candidates).toBeGreaterThan(MAX_ANCHORS);
    expect(cold).toHaveLength(MAX_ANCHORS);
  });
});

describe('half-covered land', () => {
  it('is no cold end: the pass is refused instead of lifted', () => {
    const summary = createSummary();
    for (let i = 0; i < 2000; i += 1) add(summary, 1, i, 0.1 + (0.45 * i) / 2000, 320 - (10 * i) / 2000);
    expect(() => selectAnchors(summary, OPTIONS)).toThrow(expect.objectContaining({ code: 'PASS_SPARSE' }));
    expect(selectAnchors(summary, { ...OPTIONS, minColdNdvi: 0.4 }).cold.length).toBeGreaterThan(0);
  });
});

describe('contamination', () => {
  const clean = selectAnchors(evenSummary(4), OPTIONS);

  it('by missed cloud and by fire does not move the anchors', () => {
    const summary = evenSummary(4);
    // 40 pixels (0.2 %) of thin cloud over crops, 40 of fire over bare ground, spread over many temperatures
    for (let i = 0; i < 40; i += 1) {
      add(summary, 1000, i, 0.87, 262 + 0.7 * i);
      add(summary, 1001, i, 0.12, 326 + 0.5 * i);
    }
    const found = selectAnchors(summary, OPTIONS);
    expect(found.diagnostics.cold.droppedPixels).toBeGreaterThanOrEqual(35);
    expect(found.diagnostics.hot.droppedPixels).toBeGreaterThanOrEqual(35);
    for (const role of ['cold', 'hot'] as const) {
      const shift = found.diagnostics[role].medianTemperature - clean.diagnostics[role].medianTemperature;
      expect(Math.abs(shift)).toBeLessThan(0.1);
      expect(found[role].every(({ row }) => row < 1000)).toBe(true);
    }
  });

  it('is told from a populated tail, which stays', () => {
    const summary = evenSummary(4);
    // 400 pixels of well watered crop at 290 K in one temperature bin: 2 % of the pass
    for (let i = 0; i < 400; i += 1) add(summary, 1000, i, 0.89, 290.1);
    const { diagnostics, cold } = selectAnchors(summary, OPTIONS);
    expect(diagnostics.cold.medianTemperature).toBeCloseTo(290.125, 1);
    expect(cold.every(({ row }) => row === 1000)).toBe(true);
  });
});

describe('a pass that cannot be calibrated', () => {
  it('says which role lacks candidates', () => {
    expect(() => selectAnchors(createSummary(), OPTIONS)).toThrow(
      expect.objectContaining({ code: 'PASS_NO_ANCHORS', parameters: { role: 'cold', found: 0, needed: 20 } }),
    );
    const summary = createSummary();
    for (let i = 0; i < 60; i += 1) add(summary, 0, i, 0.8, 300);
    for (let i = 0; i < 10; i += 1) add(summary, 1, i, 0.1, 320);
    expect(() => selectAnchors(summary, OPTIONS)).toThrow(
      expect.objectContaining({ code: 'PASS_NO_ANCHORS', parameters: { role: 'hot', found: 10, needed: 20 } }),
    );
    expect(selectAnchors(summary, { ...OPTIONS, minCandidates: 10 }).hot.length).toBeGreaterThan(0);
  });

  it('says that bare ground is colder than crops', () => {
    const summary = createSummary();
    for (let i = 0; i < 60; i += 1) {
      add(summary, 0, i, 0.8, 300);
      add(summary, 1, i, 0.1, 299);
    }
    expect(() => selectAnchors(summary, OPTIONS)).toThrow(expect.objectContaining({ code: 'PASS_CALIBRATION' }));
  });
});

// regression: how far noise draws the cold anchors, and that neighbourhood means take most of it away
it('noise biases the cold end less when 3 x 3 means are summarised', () => {
  const noisy = fieldPass(WHOLE, { seed: 21, noiseK: 0.5 });
  const quiet = fieldPass(WHOLE, { seed: 21, noiseK: 0 });
  const limit = { ...OPTIONS, minCandidates: 20 };
  const truth = selectAnchors(summariseWindow(quiet, WHOLE, INNER), limit).diagnostics.cold.medianTemperature;
  const single = selectAnchors(summariseWindow(noisy, WHOLE, INNER), limit).diagnostics.cold.medianTemperature;

  const padded = grow(INNER, 1);
  const datumTemperature = new Float32Array(noisy.datumTemperature.length).fill(Number.NaN);
  neighbourhoodMean(noisy.datumTemperature, WHOLE, padded).forEach((mean, i) => {
    const row = Math.floor(i / padded.columns) + 1;
    datumTemperature[row * WHOLE.columns + (i % padded.columns) + 1] = mean;
  });
  const means = summariseWindow({ ...noisy, datumTemperature }, WHOLE, INNER);
  const averaged = selectAnchors(means, limit).diagnostics.cold.medianTemperature;
  expect(single - truth).toBeLessThan(-0.15);
  expect(Math.abs(averaged - truth)).toBeLessThan(0.6 * Math.abs(single - truth));
});
