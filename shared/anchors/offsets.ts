import { componentsOf } from './components.ts';
import { type Equation, solveLeastSquares } from './least-squares.ts';

/** Mean values of two images over the pixels that both see. */
export interface OffsetLink {
  readonly first: number;
  readonly second: number;
  readonly meanFirst: number;
  readonly meanSecond: number;
  /** Relative weight, such as the number of pixels: one over the variance up to a factor. */
  readonly weight: number;
}

export interface OffsetOptions {
  /** Image whose offset is 0, or offsets that add up to 0. */
  readonly fixed: number | 'sum-zero';
  /** Number of images; default: one more than the largest index in the links. */
  readonly count?: number;
  /** Huber's k in units of 1 / sqrt(weight); default: plain least squares. */
  readonly huberK?: number;
}

/**
 * Block adjustment by offsets without priors: minimises the sum of
 * weight [(meanFirst + o_first) - (meanSecond + o_second)]^2 under the datum asked for.
 *
 * Each connected component has its own datum. With a fixed image, the components that do not hold it, and with
 * 'sum-zero' all, get offsets that add up to 0; an image without links keeps offset 0.
 */
export function solveOffsets(links: readonly OffsetLink[], options: OffsetOptions): number[] {
  const count = options.count ?? links.reduce((most, { first, second }) => Math.max(most, first + 1, second + 1), 0);
  const component = componentsOf(
    count,
    links.map(({ first, second }) => [first, second]),
  );
  // the first image of each component is held at 0; the datum is set by a shift afterwards
  const unknownOf = new Map<number, number>();
  component.forEach((root, image) => {
    if (root !== image) unknownOf.set(image, unknownOf.size);
  });
  const equations = links.map(({ first, second, meanFirst, meanSecond, weight }): Equation => {
    const terms: [number, number][] = [];
    if (unknownOf.has(first)) terms.push([unknownOf.get(first)!, 1]);
    if (unknownOf.has(second)) terms.push([unknownOf.get(second)!, -1]);
    return { terms, target: meanSecond - meanFirst, sigma: 1 / Math.sqrt(weight) };
  });
  const free = new Array<number>(unknownOf.size).fill(0);
  const solution = solveLeastSquares(equations, free, options.huberK ?? Number.POSITIVE_INFINITY);
  const offsets = component.map((_, image) => solution[unknownOf.get(image) ?? -1] ?? 0);
  return component.map((root, image) => offsets[image] - datumOf(root));

  function datumOf(root: number): number {
    if (options.fixed !== 'sum-zero' && component[options.fixed] === root) return offsets[options.fixed];
    const members = offsets.filter((_, image) => component[image] === root);
    return members.reduce((sum, offset) => sum + offset, 0) / members.length;
  }
}
