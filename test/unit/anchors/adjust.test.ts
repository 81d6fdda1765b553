import { Matrix, solve } from 'ml-matrix';
import { describe, expect, it } from 'vitest';
import { type AdjustmentLink, solveAdjustment, solveOffsets } from '../../../shared/anchors/adjust.ts';
import { weighLink } from '../../../shared/anchors/link.ts';
import { OverlapStats } from '../../../shared/anchors/overlap.ts';
import { basinFileSchema } from '../../../shared/contract/basin-file.ts';
import { normal, seeded } from './random.ts';

const OPTIONS = basinFileSchema.shape.method.parse({}).adjust;

interface PassError {
  readonly gain?: number;
  readonly offset: number;
}

/** Overlap of two passes over one true field of fractions 0 to 1.1, each with its own error and noise. */
function overlap(first: PassError, second: PassError, seed: number, pixels = 5000, noise = 0.03): OverlapStats {
  const random = seeded(seed);
  const gauss = normal(random);
  const stats = new OverlapStats();
  for (let i = 0; i < pixels; i += 1) {
    const truth = 1.1 * random();
    stats.add(
      (first.gain ?? 1) * truth + first.offset + noise * gauss(),
      (second.gain ?? 1) * truth + second.offset + noise * gauss(),
    );
  }
  return stats;
}

/** A strip of passes, each overlapping the next two in time. */
function strip(errors: readonly PassError[]): { passes: string[]; links: AdjustmentLink[] } {
  const passes = errors.map((_, i) => `p${String(i).padStart(2, '0')}`);
  const links: AdjustmentLink[] = [];
  for (let i = 0; i < errors.length; i += 1) {
    for (const j of [i + 1, i + 2]) {
      if (j >= errors.length) continue;
      const stats = overlap(errors[i], errors[j], 100 * i + j);
      links.push({ first: passes[i], second: passes[j], stats, daysApart: 4 * (j - i), rainMm: 0 });
    }
  }
  return { passes, links };
}

const ERRORS = [0.04, -0.03, 0, 0.06, -0.05, 0.02, -0.04].map((offset) => ({ offset }));
const MEAN_ERROR = ERRORS.reduce((sum, { offset }) => sum + offset, 0) / ERRORS.length;

describe('adjustment of a strip of passes', () => {
  const { passes, links } = strip(ERRORS);
  const { adjustments, residuals, totalShift } = solveAdjustment(passes, links, OPTIONS);

  it('recovers known offsets up to their common mean', () => {
    adjustments.forEach(({ offset, gain }, i) => {
      expect(gain).toBe(1);
      expect(Math.abs(offset - (MEAN_ERROR - ERRORS[i].offset))).toBeLessThan(0.004);
    });
  });

  it('keeps the mean level: the priors are the datum', () => {
    expect(Math.abs(totalShift.mean)).toBeLessThan(1e-9);
    expect(totalShift.passes).toBe(7);
    expect(totalShift.rms).toBeGreaterThan(0.02);
    expect(totalShift.largest).toBeLessThan(0.07);
  });

  it('reports every overlap before and after', () => {
    expect(residuals).toHaveLength(links.length);
    residuals.forEach((residual, i) => {
      expect(residual.pixels).toBe(5000);
      expect(residual.before).toBeCloseTo(residual.meanFirst - residual.meanSecond, 12);
      const offset = (name: string) => adjustments[passes.indexOf(name)].offset;
      const moved = offset(links[i].first) - offset(links[i].second);
      expect(residual.after).toBeCloseTo(residual.before + moved, 12);
      expect(Math.abs(residual.after)).toBeLessThan(0.006);
      expect(Math.abs(residual.medianAfter)).toBeLessThan(0.006);
    });
  });

  it('does not know the order of passes and links', () => {
    const turned = solveAdjustment(passes.toReversed(), links.toReversed(), OPTIONS);
    expect(turned.adjustments.toReversed()).toEqual(adjustments);
    expect(turned.residuals.toReversed()).toEqual(residuals);
  });

  it('takes a link turned round for the same link', () => {
    const turned = links.map((link, i): AdjustmentLink => {
      if (i % 2 === 0) return link;
      const [a, b] = [passes.indexOf(link.first), passes.indexOf(link.second)];
      const stats = overlap(ERRORS[b], ERRORS[a], 7000 + i);
      return { ...link, first: link.second, second: link.first, stats };
    });
    solveAdjustment(passes, turned, OPTIONS).adjustments.forEach(({ offset }, i) => {
      expect(Math.abs(offset - adjustments[i].offset)).toBeLessThan(0.003);
    });
  });
});

describe('a deliberate calibration error', () => {
  it.each([0.1, 0.15, -0.2])('of %f is taken out to a third or less', (error) => {
    const { passes, links } = strip([0, 0, error, 0, 0].map((offset) => ({ offset })));
    const { residuals } = solveAdjustment(passes, links, OPTIONS);
    const touched = residuals.filter(({ first, second }) => first === 'p02' || second === 'p02');
    expect(touched).toHaveLength(4);
    for (const { before, after } of touched) {
      expect(Math.abs(before)).toBeGreaterThan(0.9 * Math.abs(error));
      expect(Math.abs(after)).toBeLessThan(Math.abs(before) / 3);
    }
  });

  it('between two passes that only have each other too, even with the fewest pixels', () => {
    const stats = overlap({ offset: 0.1 }, { offset: 0 }, 5, OPTIONS.minPixels, 0.07);
    const links = [{ first: 'a', second: 'b', stats, daysApart: 8, rainMm: 0 }];
    const [{ before, after }] = solveAdjustment(['a', 'b'], links, OPTIONS).residuals;
    expect(before).toBeGreaterThan(0.09);
    expect(Math.abs(after)).toBeLessThan(before / 3);
  });
});

describe('outliers', () => {
  const { passes, links } = strip(ERRORS);
  // one overlap says something that the other overlaps of its passes contradict
  const [a, b] = [2, 3];
  const wrong = overlap({ offset: ERRORS[a].offset + 0.4 }, ERRORS[b], 77);
  const spoilt = links.map((link) =>
    link.first === passes[a] && link.second === passes[b] ? { ...link, stats: wrong } : link,
  );

  it('among links are resisted', () => {
    const { adjustments } = solveAdjustment(passes, spoilt, OPTIONS);
    adjustments.forEach(({ offset }, i) => {
      expect(Math.abs(offset - (MEAN_ERROR - ERRORS[i].offset))).toBeLessThan(0.02);
    });
    // plain least squares is drawn away much further
    const plain = solveOffsets(
      spoilt.map(({ first, second, stats }) => ({
        first: passes.indexOf(first),
        second: passes.indexOf(second),
        meanFirst: stats.meanFirst,
        meanSecond: stats.meanSecond,
        weight: 1,
      })),
      { fixed: 'sum-zero' },
    );
    expect(Math.abs(plain[a] - (MEAN_ERROR - ERRORS[a].offset))).toBeGreaterThan(0.05);
  });

  it('among pixels are resisted', () => {
    const random = seeded(9);
    const changed = links.map((link, i): AdjustmentLink => {
      const stats = overlap(ERRORS[passes.indexOf(link.first)], ERRORS[passes.indexOf(link.second)], 300 + i);
      for (let k = 0; k < 500; k += 1) stats.add(0.9 + 0.1 * random(), 0.3);
      return { ...link, stats };
    });
    solveAdjustment(passes, changed, OPTIONS).adjustments.forEach(({ offset }, i) => {
      expect(Math.abs(offset - (MEAN_ERROR - ERRORS[i].offset))).toBeLessThan(0.012);
    });
  });
});

describe('gain', () => {
  const options = { ...OPTIONS, parameters: 'offset-and-gain' } as const;

  it('and offset are recovered together', () => {
    const errors = [
      { gain: 1.08, offset: -0.03 },
      { gain: 0.94, offset: 0.04 },
      { gain: 0.98, offset: -0.01 },
    ];
    const { passes, links } = strip(errors);
    const { adjustments } = solveAdjustment(passes, links, options);
    // after adjustment all passes map the truth to one line
    for (const truth of [0.1, 0.6, 1]) {
      const values = errors.map(
        ({ gain, offset }, i) => adjustments[i].gain * (gain * truth + offset) + adjustments[i].offset,
      );
      expect(Math.max(...values) - Math.min(...values)).toBeLessThan(0.015);
      expect(Math.abs(values[0] - truth)).toBeLessThan(0.02);
    }
    expect(Math.abs(adjustments[0].gain - adjustments[1].gain)).toBeGreaterThan(0.08);
  });

  it('is not told from overlaps without spread', () => {
    const stats = new OverlapStats();
    const gauss = normal(seeded(4));
    for (let i = 0; i < 5000; i += 1) stats.add(0.1 + 0.02 * gauss(), 0.02 * gauss());
    const links = [{ first: 'a', second: 'b', stats, daysApart: 1, rainMm: 0 }];
    const { adjustments } = solveAdjustment(['a', 'b'], links, options);
    for (const { gain } of adjustments) expect(Math.abs(gain - 1)).toBeLessThan(0.01);
    expect(adjustments[1].offset - adjustments[0].offset).toBeGreaterThan(0.08);
  });
});

describe('links out of bounds', () => {
  const stats = overlap({ offset: 0.1 }, { offset: 0 }, 1);
  const few = overlap({ offset: 0.1 }, { offset: 0 }, 1, 499);
  const link = { first: 'a', second: 'b', stats, daysApart: 8, rainMm: 0 };
  it.each<[string, AdjustmentLink, Partial<typeof OPTIONS>]>([
    ['11 days apart', { ...link, daysApart: 11 }, {}],
    ['mm of rain', { ...link, rainMm: 3.1 }, {}],
    ['not known', { ...link, rainMm: Number.NaN }, {}],
    ['499 pixels', { ...link, stats: few }, {}],
    ['switched off', link, { use: false }],
    ['pass z', { ...link, second: 'z' }, {}],
  ])('are cut and reported: %s', (reason, cut, options) => {
    const { adjustments, residuals } = solveAdjustment(['a', 'b'], [cut], { ...OPTIONS, ...options });
    expect(residuals[0].cut).toContain(reason);
    expect(residuals[0].after).toBe(residuals[0].before);
    expect(adjustments).toEqual(['a', 'b'].map((passId) => ({ passId, gain: 1, offset: 0, links: 0 })));
  });

  it('at the limits are used', () => {
    const { adjustments, residuals } = solveAdjustment(['a', 'b'], [{ ...link, daysApart: 10, rainMm: 3 }], OPTIONS);
    expect(residuals[0].cut).toBeUndefined();
    expect(adjustments.map(({ links }) => links)).toEqual([1, 1]);
  });
});

it('separate groups of passes do not touch one another', () => {
  const one = strip(ERRORS.slice(0, 3));
  const other = strip(ERRORS.slice(3));
  const rename = (name: string) => `q${name}`;
  const links = [
    ...one.links,
    ...other.links.map((link) => ({ ...link, first: rename(link.first), second: rename(link.second) })),
  ];
  const passes = [...one.passes, ...other.passes.map(rename), 'alone'];
  const together = solveAdjustment(passes, links, OPTIONS).adjustments;
  const apart = [one, other].flatMap((part) => solveAdjustment(part.passes, part.links, OPTIONS).adjustments);
  expect(together.slice(0, 7).map(({ offset }) => offset)).toEqual(apart.map(({ offset }) => offset));
  expect(together[7]).toEqual({ passId: 'alone', gain: 1, offset: 0, links: 0 });
});

it('without outliers solves the normal equations with priors', () => {
  // small errors, so that no residual reaches Huber's bend; solved here with the library's LU instead
  const { passes, links } = strip([0.004, -0.003, 0.001, 0.002].map((offset) => ({ offset })));
  const normalMatrix = Matrix.eye(4).mul(1 / OPTIONS.anchorUncertainty ** 2);
  const right = Matrix.zeros(4, 1);
  for (const link of links) {
    const { levelFirst, levelSecond, sigma } = weighLink(link);
    const row = Matrix.zeros(1, 4);
    row.set(0, passes.indexOf(link.first), 1 / sigma);
    row.set(0, passes.indexOf(link.second), -1 / sigma);
    normalMatrix.add(row.transpose().mmul(row));
    right.add(row.transpose().mul((levelSecond - levelFirst) / sigma));
  }
  const expected = solve(normalMatrix, right).to1DArray();
  solveAdjustment(passes, links, OPTIONS).adjustments.forEach(({ offset }, i) => {
    expect(offset).toBeCloseTo(expected[i], 10);
  });
});

describe('the sureness of a link', () => {
  const sigma = (pixels: number, daysApart: number) =>
    weighLink({
      first: 'a',
      second: 'b',
      stats: overlap({ offset: 0 }, { offset: 0 }, 3, pixels),
      daysApart,
      rainMm: 0,
    }).sigma;

  it('grows with pixels up to a cap and falls with time', () => {
    expect(sigma(2000, 1)).toBeLessThan(sigma(500, 1));
    expect(Math.abs(sigma(60_000, 1) - sigma(30_000, 1))).toBeLessThan(2e-5);
    expect(sigma(2000, 8)).toBeGreaterThan(sigma(2000, 1));
  });

  it('is well within the uncertainty of the anchors', () => {
    expect(sigma(OPTIONS.minPixels, OPTIONS.maxGapDays)).toBeLessThan(OPTIONS.anchorUncertainty / 2.5);
  });
});
