import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { addOverlap, OverlapStats, stablePixels } from '../../../shared/anchors/overlap.ts';
import { normal, seeded } from './random.ts';

const fraction = fc.double({ min: -0.2, max: 1.5, noNaN: true });

const statsOf = (pairs: readonly (readonly [number, number])[]): OverlapStats => {
  const stats = new OverlapStats();
  addOverlap(
    stats,
    Float32Array.from(pairs, ([a]) => a),
    Float32Array.from(pairs, ([, b]) => b),
  );
  return stats;
};

describe('overlap statistics', () => {
  it('merge exactly, however the pixels are split and ordered', () => {
    fc.assert(
      fc.property(
        fc.array(fc.tuple(fraction, fraction), { minLength: 1, maxLength: 60 }),
        fc.nat(),
        fc.nat(),
        (pairs, x, y) => {
          const [low, high] = [x % pairs.length, y % pairs.length].sort((p, q) => p - q);
          const merged = statsOf(pairs.slice(high).toReversed());
          merged.merge(OverlapStats.fromJSON(JSON.parse(JSON.stringify(statsOf(pairs.slice(0, low))))));
          merged.merge(statsOf(pairs.slice(low, high)));
          expect(merged.toJSON()).toEqual(statsOf(pairs).toJSON());
        },
      ),
    );
  });

  it('are means, deviations and correlation of the pairs', () => {
    // first 0.2 0.4 0.6 0.8, second 0.3 0.3 0.7 0.7: sd 0.1 sqrt 5 and 0.2, covariance 0.04
    const stats = statsOf([
      [0.2, 0.3],
      [0.4, 0.3],
      [0.6, 0.7],
      [0.8, 0.7],
    ]);
    expect(stats.n).toBe(4);
    expect(stats.meanFirst).toBeCloseTo(0.5, 12);
    expect(stats.meanSecond).toBeCloseTo(0.5, 12);
    expect(stats.sdFirst).toBeCloseTo(0.1 * Math.sqrt(5), 12);
    expect(stats.sdSecond).toBeCloseTo(0.2, 12);
    expect(stats.correlation).toBeCloseTo(0.04 / (0.1 * Math.sqrt(5) * 0.2), 12);
  });

  it('have a median and a spread that outliers hardly move', () => {
    const gauss = normal(seeded(8));
    const pairs = Array.from({ length: 20_000 }, (_, i): [number, number] => {
      const b = 0.5;
      // one pixel in ten was irrigated in between
      return [b + (i % 10 === 0 ? 0.5 : 0.03 + 0.05 * gauss()), b];
    });
    const stats = statsOf(pairs);
    expect(stats.meanFirst - stats.meanSecond).toBeGreaterThan(0.07);
    expect(Math.abs(stats.medianDifference - 0.03)).toBeLessThan(0.01);
    expect(Math.abs(stats.robustSdDifference - 0.05)).toBeLessThan(0.01);
  });

  it('leave out what is no number, no fraction or not stable', () => {
    const stats = new OverlapStats();
    const first = Float32Array.of(0.5, Number.NaN, 0.5, 9, 0.5);
    const second = Float32Array.of(0.5, 0.5, Number.NaN, 0.5, 0.5);
    addOverlap(stats, first, second, Uint8Array.of(1, 1, 1, 1, 0));
    expect(stats.n).toBe(1);
  });

  it('without pixels are NaN', () => {
    const { meanFirst, medianDifference, robustSdDifference, correlation } = new OverlapStats();
    expect([meanFirst, medianDifference, robustSdDifference, correlation]).toEqual(new Array(4).fill(Number.NaN));
  });

  it('put differences beyond the histogram into its ends', () => {
    const stats = statsOf([
      [3, -1],
      [-1, 3],
      [0.1, 0.1],
    ]);
    expect(stats.toJSON().differences.map(([bin]) => bin)).toEqual([0, 300, 599]);
  });

  it('refuse planes of different length', () => {
    expect(() => addOverlap(new OverlapStats(), new Float32Array(2), new Float32Array(3))).toThrow(
      expect.objectContaining({ code: 'INTERNAL' }),
    );
  });
});

describe('stable pixels', () => {
  const fractions = Float32Array.of(0.5, Number.NaN, 0.5, 0.5);
  const others = Float32Array.of(0.4, 0.5, 0.5, 0.5);

  it('have both fractions and little change of NDVI', () => {
    const ndvi = Float32Array.of(0.7, 0.7, 0.7, 0.7);
    const later = Float32Array.of(0.75, 0.7, 0.5, Number.NaN);
    expect([...stablePixels(fractions, others, ndvi, later)]).toEqual([1, 0, 0, 0]);
    expect([...stablePixels(fractions, others, ndvi, later, { maxNdviChange: 0.3 })]).toEqual([1, 0, 1, 0]);
  });

  it('may be asked for little change of temperature too', () => {
    const ndvi = new Float32Array(4).fill(0.7);
    const datumFirst = Float32Array.of(300, 300, 300, 300);
    const datumSecond = Float32Array.of(306, 300, 303, Number.NaN);
    const options = { datumFirst, datumSecond, maxTemperatureChangeK: 5 };
    expect([...stablePixels(fractions, others, ndvi, ndvi, options)]).toEqual([0, 0, 1, 0]);
  });
});
