import type { BasinFile } from '../contract/basin-file.ts';
import type { OverlapResidual, PassAdjustment } from '../contract/calibration.ts';
import { componentsOf } from './components.ts';
import { type Equation, solveLeastSquares } from './least-squares.ts';
import { type AdjustmentLink, cutReason, type LinkEvidence, weighLink } from './link.ts';
import { trendOf } from './trend.ts';

export type { AdjustmentLink } from './link.ts';
export { type OffsetLink, type OffsetOptions, solveOffsets } from './offsets.ts';

type AdjustOptions = BasinFile['method']['adjust'];

/** An overlap with the robust centre of its differences, on which the adjustment rests. */
export interface AdjustmentResidual extends OverlapResidual {
  /** Median difference first minus second before and after adjustment; true changes of some pixels hardly move it. */
  readonly medianBefore: number;
  readonly medianAfter: number;
}

/** What the adjustment did to the fractions of the adjusted passes, each at its mean fraction in the overlaps. */
export interface AdjustmentShift {
  readonly passes: number;
  readonly mean: number;
  readonly rms: number;
  readonly largest: number;
}

export interface AdjustmentSolution {
  /** One for each pass, in the order given. */
  readonly adjustments: PassAdjustment[];
  /** One for each link, in the order given, cut ones included. */
  readonly residuals: AdjustmentResidual[];
  readonly totalShift: AdjustmentShift;
}

/**
 * Joint adjustment of all passes: fraction' = gain * fraction + offset.
 *
 * Minimises Huber's loss of all link differences over their standard deviations (see link.ts) plus priors:
 * offset ~ N(0, s^2) and gain ~ N(1, s^2) with s = anchorUncertainty. The priors are the datum: they hold the
 * level of each connected group of passes at the mean of its own calibrations, and no pass moves further from
 * its anchors than the overlaps can defend. A pass without links keeps gain 1 and offset 0 exactly.
 *
 * Where the dates are known, a trend that all land shares is solved for beside the passes (see trend.ts).
 *
 * Links out of bounds are cut (`cut` says why) but still reported. Neither the order of passes nor that of
 * links changes the result.
 */
export function solveAdjustment(
  passes: readonly string[],
  links: readonly AdjustmentLink[],
  options: AdjustOptions,
): AdjustmentSolution {
  const cuts = links.map((link) => cutReason(link, passes, options));
  const used = links
    .filter((_, i) => cuts[i] === undefined)
    .map(weighLink)
    .sort(byNames);
  const byPass = new Map<string, PassAdjustment>();
  for (const group of groupsOf(used)) {
    for (const adjustment of solveGroup(group, options)) byPass.set(adjustment.passId, adjustment);
  }
  const adjustments = passes.map((passId) => byPass.get(passId) ?? { passId, gain: 1, offset: 0, links: 0 });
  const residuals = links.map((link, i) => residualOf(link, cuts[i], byPass));
  return { adjustments, residuals, totalShift: shiftOf(adjustments, used) };
}

const compareText = (a: string, b: string): number => (a < b ? -1 : a > b ? 1 : 0);

/** A fixed order, so that sums do not depend on the order in which links arrive. */
const byNames = (a: LinkEvidence, b: LinkEvidence): number =>
  compareText(a.first, b.first) ||
  compareText(a.second, b.second) ||
  a.pixels - b.pixels ||
  a.levelFirst - b.levelFirst ||
  a.levelSecond - b.levelSecond ||
  a.sigma - b.sigma;

/** Links by connected group of passes, each group with its passes in order of name. */
function groupsOf(links: readonly LinkEvidence[]): { names: string[]; links: LinkEvidence[] }[] {
  const names = [...new Set(links.flatMap(({ first, second }) => [first, second]))].sort(compareText);
  const indexOf = new Map(names.map((name, index) => [name, index]));
  const roots = componentsOf(
    names.length,
    links.map(({ first, second }) => [indexOf.get(first)!, indexOf.get(second)!]),
  );
  return [...new Set(roots)].map((root) => ({
    names: names.filter((_, index) => roots[index] === root),
    links: links.filter(({ first }) => roots[indexOf.get(first)!] === root),
  }));
}

/** Unknowns: the offset of each pass; if asked for, gain - 1 of each pass; the slopes of the common trend. */
function solveGroup(
  { names, links }: { names: string[]; links: LinkEvidence[] },
  options: AdjustOptions,
): PassAdjustment[] {
  const withGain = options.parameters === 'offset-and-gain';
  const indexOf = new Map(names.map((name, index) => [name, index]));
  const corrections = withGain ? 2 * names.length : names.length;
  const trend = trendOf(links);
  const equations = links.flatMap((link) => {
    const first = indexOf.get(link.first)!;
    const second = indexOf.get(link.second)!;
    const change = trend?.termsOf(link).map(([interval, days]) => [corrections + interval, days] as const) ?? [];
    const offsets = [[first, 1] as const, [second, -1] as const, ...change];
    if (!withGain) return [equation(offsets, link.levelFirst, link.levelSecond, link.sigma)];
    const at = (a: number, b: number, sigma: number) =>
      equation([...offsets, [names.length + first, a], [names.length + second, -b]], a, b, sigma);
    const { levelFirst: a, levelSecond: b, spreadFirst: p, spreadSecond: q, sigma } = link;
    if (p === 0) return [at(a, b, sigma)];
    // two points of the line that maps one pass onto the other; together they weigh as much as the one of the level
    return [at(a - p, b - q, sigma * Math.SQRT2), at(a + p, b + q, sigma * Math.SQRT2)];
  });
  const precision = new Array<number>(corrections).fill(1 / options.anchorUncertainty ** 2);
  const solution = solveLeastSquares(equations, [...precision, ...(trend?.precision ?? [])]);
  return names.map((passId, index) => ({
    passId,
    gain: withGain ? 1 + solution[names.length + index] : 1,
    offset: solution[index],
    links: links.filter(({ first, second }) => first === passId || second === passId).length,
  }));
}

/** (first value + corrections) + change of the land - (second value + corrections) = 0. */
const equation = (
  terms: readonly (readonly [number, number])[],
  first: number,
  second: number,
  sigma: number,
): Equation => ({ terms, target: second - first, sigma });

const applied = (adjustment: PassAdjustment | undefined, value: number): number =>
  adjustment === undefined ? value : adjustment.gain * value + adjustment.offset;

function residualOf(
  link: AdjustmentLink,
  cut: string | undefined,
  byPass: ReadonlyMap<string, PassAdjustment>,
): AdjustmentResidual {
  const { first, second, stats, daysApart } = link;
  const { meanFirst, meanSecond, medianDifference } = stats;
  const before = meanFirst - meanSecond;
  const after = applied(byPass.get(first), meanFirst) - applied(byPass.get(second), meanSecond);
  return {
    first,
    second,
    pixels: stats.n,
    daysApart,
    meanFirst,
    meanSecond,
    before,
    after,
    medianBefore: medianDifference,
    medianAfter: medianDifference + (after - before),
    ...(cut === undefined ? {} : { cut }),
  };
}

function shiftOf(adjustments: readonly PassAdjustment[], links: readonly LinkEvidence[]): AdjustmentShift {
  const shifts = adjustments.flatMap((adjustment) => {
    const levels = links.flatMap((link) => [
      ...(link.first === adjustment.passId ? [{ level: link.levelFirst, pixels: link.pixels }] : []),
      ...(link.second === adjustment.passId ? [{ level: link.levelSecond, pixels: link.pixels }] : []),
    ]);
    if (levels.length === 0) return [];
    const pixels = levels.reduce((sum, each) => sum + each.pixels, 0);
    const level = levels.reduce((sum, each) => sum + each.level * each.pixels, 0) / pixels;
    return [applied(adjustment, level) - level];
  });
  const passes = shifts.length;
  if (passes === 0) return { passes, mean: 0, rms: 0, largest: 0 };
  return {
    passes,
    mean: shifts.reduce((sum, shift) => sum + shift, 0) / passes,
    rms: Math.sqrt(shifts.reduce((sum, shift) => sum + shift ** 2, 0) / passes),
    largest: Math.max(...shifts.map(Math.abs)),
  };
}
