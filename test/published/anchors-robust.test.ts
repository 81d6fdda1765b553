import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { solveOffsets } from '../../shared/anchors/adjust.ts';
import { studentT95 } from '../../shared/anchors/cluster-moments.ts';
import { SeamStats } from '../../shared/anchors/seam.ts';

/**
 * Outside check: Huber's estimate of location. Copper in wholemeal flour, 24 determinations (Venables & Ripley,
 * Modern Applied Statistics with S, 4th ed., section 5.5; data set chem): with the median absolute deviation
 * 0.526323 as scale and k = 1.5 the published estimate is 3.206724.
 */
const COPPER = [
  2.9, 3.1, 3.4, 3.4, 3.7, 3.7, 2.8, 2.5, 2.4, 2.4, 2.7, 2.2, 5.28, 3.37, 3.03, 3.03, 28.95, 3.77, 3.4, 2.2, 3.5, 3.6,
  3.7, 3.7,
];

describe('robust least squares', () => {
  it('gives the published Huber estimate of the copper data', () => {
    // two images, the first fixed; every link says that the second lies lower by one determination
    const links = COPPER.map((value) => ({
      first: 0,
      second: 1,
      meanFirst: value,
      meanSecond: 0,
      weight: 1 / 0.526323 ** 2,
    }));
    const [fixed, offset] = solveOffsets(links, { fixed: 0, huberK: 1.5 });
    expect(fixed).toBe(0);
    // R stops its iteration at 1e-6 of the scale
    expect(Math.abs(offset - 3.206724)).toBeLessThan(2e-6);
  });
});

/**
 * Block adjustment by offsets (gain and bias adjustment over overlaps, common practice in mosaicking). The
 * numbers are regression numbers; each is also solved here by its normal equations.
 */
describe('block adjustment by offsets', () => {
  const links = [
    { first: 0, second: 1, meanFirst: 0.62, meanSecond: 0.7, weight: 5000 },
    { first: 1, second: 2, meanFirst: 0.55, meanSecond: 0.47, weight: 2000 },
    { first: 0, second: 2, meanFirst: 0.6, meanSecond: 0.61, weight: 500 },
  ];

  it('with the first image fixed (regression)', () => {
    const offsets = solveOffsets(links, { fixed: 0 });
    expect(offsets[0]).toBe(0);
    expect(offsets[1]).toBeCloseTo(-0.0807407, 7);
    expect(offsets[2]).toBeCloseTo(-0.0025926, 7);
    const residuals = links.map(
      ({ first, second, meanFirst, meanSecond }) => meanFirst + offsets[first] - meanSecond - offsets[second],
    );
    expect(residuals[0]).toBeCloseTo(0.00074, 5);
    expect(residuals[1]).toBeCloseTo(0.00185, 5);
    expect(residuals[2]).toBeCloseTo(-0.00741, 5);
  });

  it('with offsets that add up to zero (regression)', () => {
    const offsets = solveOffsets(links, { fixed: 'sum-zero' });
    [0.0277778, -0.052963, 0.0251852].forEach((expected, i) => {
      expect(offsets[i]).toBeCloseTo(expected, 7);
    });
  });

  it('solves the normal equations', () => {
    // unknowns o1, o2: 5000 (-0.08 - o1)^2 + 2000 (0.08 + o1 - o2)^2 + 500 (-0.01 - o2)^2 is least
    const normal = new Matrix([
      [7000, -2000],
      [-2000, 2500],
    ]);
    const right = Matrix.columnVector([-5000 * 0.08 - 2000 * 0.08, 2000 * 0.08 - 500 * 0.01]);
    const [o1, o2] = solve(normal, right).to1DArray();
    const offsets = solveOffsets(links, { fixed: 0 });
    expect(offsets[1]).toBeCloseTo(o1, 12);
    expect(offsets[2]).toBeCloseTo(o2, 12);
  });

  it('gives each connected group its own datum', () => {
    const apart = [...links, { first: 3, second: 4, meanFirst: 0.5, meanSecond: 0.4, weight: 10 }];
    const offsets = solveOffsets(apart, { fixed: 1, count: 6 });
    expect(offsets[1]).toBe(0);
    expect(offsets[0]).toBeCloseTo(0.0807407, 7);
    expect(offsets.slice(3)).toEqual([expect.closeTo(-0.05, 12), expect.closeTo(0.05, 12), 0]);
  });
});

/**
 * Outside check of the ratio estimator: ten cities in 1920 (u) and 1930 (x) (Davison & Hinkley 1997, Bootstrap
 * Methods and their Application, example 1.2 and section 2.7): ratio 1.520, linearised variance 0.0325. That
 * variance divides the squared residuals by n; Cochran's divides by n - 1.
 */
describe('ratio of seam jumps', () => {
  const u = [138, 93, 61, 179, 48, 37, 29, 23, 30, 2];
  const x = [143, 104, 69, 260, 75, 63, 50, 48, 111, 50];

  it('has the published ratio and variance of the city data', () => {
    const stats = new SeamStats();
    // ten clusters of one run with jump x and mean neighbour jump u
    u.forEach((reference, i) => {
      stats.add(reference, 0, x[i], x[i] + reference, i);
    });
    const { ratio } = stats.result();
    expect(ratio.value).toBeCloseTo(1.52, 3);
    expect(ratio.standardError ** 2 * (9 / 10)).toBeCloseTo(0.0325, 4);
  });

  it("has intervals by Student's t as tabulated (Abramowitz & Stegun 1964, table 26.10)", () => {
    for (const [degreesOfFreedom, tabulated] of [
      [4, 2.776],
      [5, 2.571],
      [9, 2.262],
      [30, 2.042],
      [120, 1.98],
    ]) {
      expect(Math.abs(studentT95(degreesOfFreedom) - tabulated)).toBeLessThan(degreesOfFreedom < 9 ? 0.01 : 0.0006);
    }
  });
});
