/** Sums over the runs of one stretch of a seam (see seam-stats.ts); whole numbers. */
export interface Cluster {
  n: number;
  /** Sum of the jumps j. */
  jump: number;
  /** Sum of 2r, r the mean neighbour jump. */
  reference: number;
  /** Sum of the signed differences. */
  difference: number;
}

/** A ratio with its standard error and 95 % confidence interval; NaN where there are too few clusters. */
export interface Estimate {
  readonly value: number;
  readonly standardError: number;
  readonly low: number;
  readonly high: number;
}

/** Below this number of clusters no interval is given: the spread between so few is not known. */
export const MIN_CLUSTERS = 5;

const NAMES = ['m', 'n', 'j', 'x', 'd', 'nn', 'jj', 'jx', 'xx', 'dd', 'dn'] as const;
type Moments = Record<(typeof NAMES)[number], bigint>;

/**
 * First and second moments of cluster totals, exact. Names: m clusters, n runs, j jump, x reference (2r),
 * d difference; two letters a product.
 */
export class ClusterMoments {
  readonly #sums: Moments;

  constructor(digits: readonly string[] = []) {
    this.#sums = Object.fromEntries(NAMES.map((name, i) => [name, BigInt(digits[i] ?? 0)])) as Moments;
  }

  add(cluster: Cluster): void {
    const n = BigInt(cluster.n);
    const j = BigInt(cluster.jump);
    const x = BigInt(cluster.reference);
    const d = BigInt(cluster.difference);
    const one: Moments = { m: 1n, n, j, x, d, nn: n * n, jj: j * j, jx: j * x, xx: x * x, dd: d * d, dn: d * n };
    for (const name of NAMES) this.#sums[name] += one[name];
  }

  merge(other: ClusterMoments): void {
    for (const name of NAMES) this.#sums[name] += other.#sums[name];
  }

  get runs(): number {
    return Number(this.#sums.n);
  }

  get meanJump(): number {
    return Number(this.#sums.j) / Number(this.#sums.n);
  }

  get meanReference(): number {
    return Number(this.#sums.x) / 2 / Number(this.#sums.n);
  }

  /** Sum of jumps over sum of r = x / 2. */
  ratio(): Estimate {
    const { m, j, x, jj, jx, xx } = this.#sums;
    return ratioEstimate(m, j, x, jj, jx, xx, 2);
  }

  meanDifference(scale: number): Estimate {
    const { m, d, n, dd, dn, nn } = this.#sums;
    return ratioEstimate(m, d, n, dd, dn, nn, scale);
  }

  /** Decimal digits of all moments in a fixed order; the constructor takes them back. */
  toJSON(): string[] {
    return NAMES.map((name) => this.#sums[name].toString());
  }
}

/**
 * Ratio estimator R = sum(y) / sum(x) over m clusters, with the linearised variance
 * m / (m - 1) sum(e^2) / sum(x)^2, e = y - R x (Cochran 1977, Sampling Techniques, 3rd ed., chapter 6, without the
 * finite population factor; cluster totals as units, chapter 9A). The interval uses Student's t.
 *
 * In whole numbers up to the division: sum(e^2) X^2 = X^2 Syy - 2 X Y Sxy + Y^2 Sxx.
 */
function ratioEstimate(m: bigint, y: bigint, x: bigint, yy: bigint, xy: bigint, xx: bigint, scale: number): Estimate {
  const value = (Number(y) / Number(x)) * scale;
  if (m < MIN_CLUSTERS || x === 0n) {
    return { value, standardError: Number.NaN, low: Number.NaN, high: Number.NaN };
  }
  const squares = Number(x * x * yy - 2n * x * y * xy + y * y * xx);
  const clusters = Number(m);
  const standardError = (Math.sqrt((squares * clusters) / (clusters - 1)) / Number(x) ** 2) * scale;
  const half = studentT95(clusters - 1) * standardError;
  return { value, standardError, low: value - half, high: value + half };
}

/**
 * Two-sided 95 % point of Student's t, by its expansion about the normal one (Abramowitz & Stegun 1964, 26.7.5,
 * three terms); error below 0.01 for 4 degrees of freedom and more.
 */
export function studentT95(degreesOfFreedom: number): number {
  const z = 1.959963984540054;
  const g1 = (z ** 3 + z) / 4;
  const g2 = (5 * z ** 5 + 16 * z ** 3 + 3 * z) / 96;
  const g3 = (3 * z ** 7 + 19 * z ** 5 + 17 * z ** 3 - 15 * z) / 384;
  return z + g1 / degreesOfFreedom + g2 / degreesOfFreedom ** 2 + g3 / degreesOfFreedom ** 3;
}
