import { BasinloomError } from '../contract/errors.ts';
import { ExactSum } from './exact-sum.ts';

/** Fractions are counted in steps of 1e-4, the step in which products store them. */
const STEPS_PER_UNIT = 10_000;
/** Larger magnitudes are no fractions (about 3.3): such a pair is left out. */
const MAX_STEPS = 32_767;

/** Histogram of first minus second: bins of 0.005 from -1.5 to 1.5; the end bins take all beyond. */
const BIN_STEPS = 50;
const BIN_FROM_STEPS = -15_000;
const BIN_COUNT = 600;

/** The upper 75 % point of the standard normal distribution: interquartile range = 2 x this x sd. */
const NORMAL_QUARTILE = 0.6744897501960817;

export interface OverlapStatsJson {
  readonly n: number;
  /** Decimal digits of the sums of a, b, a^2, b^2 and a b, a and b in steps of 1e-4. */
  readonly sums: readonly [string, string, string, string, string];
  /** Bin and count of the bins that are not empty, in ascending order. */
  readonly differences: readonly (readonly [number, number])[];
}

/**
 * Statistics of one pair of passes over the pixels that both see. All sums are of integers and exact, so tiles
 * merge in any order to the same numbers.
 */
export class OverlapStats {
  #n = 0;
  #first = new ExactSum();
  #second = new ExactSum();
  #firstSquared = new ExactSum();
  #secondSquared = new ExactSum();
  #product = new ExactSum();
  readonly #differences = new Float64Array(BIN_COUNT);

  /** Adds one pixel; a pair with NaN or beyond plus or minus 3.27 is left out. */
  add(first: number, second: number): void {
    const a = Math.round(first * STEPS_PER_UNIT);
    const b = Math.round(second * STEPS_PER_UNIT);
    if (!(Math.abs(a) <= MAX_STEPS && Math.abs(b) <= MAX_STEPS)) return;
    this.#n += 1;
    this.#first.add(a);
    this.#second.add(b);
    this.#firstSquared.add(a * a);
    this.#secondSquared.add(b * b);
    this.#product.add(a * b);
    const bin = Math.floor((a - b - BIN_FROM_STEPS) / BIN_STEPS);
    this.#differences[Math.min(Math.max(bin, 0), BIN_COUNT - 1)] += 1;
  }

  /** Adds all pixels of `other`; exact. */
  merge(other: OverlapStats): void {
    this.#n += other.#n;
    this.#first.merge(other.#first);
    this.#second.merge(other.#second);
    this.#firstSquared.merge(other.#firstSquared);
    this.#secondSquared.merge(other.#secondSquared);
    this.#product.merge(other.#product);
    for (let bin = 0; bin < BIN_COUNT; bin += 1) this.#differences[bin] += other.#differences[bin];
  }

  get n(): number {
    return this.#n;
  }

  /** NaN without pixels, as are all statistics below. */
  get meanFirst(): number {
    return this.#first.valueOf() / STEPS_PER_UNIT / this.#n;
  }

  get meanSecond(): number {
    return this.#second.valueOf() / STEPS_PER_UNIT / this.#n;
  }

  /** Population standard deviation of the first pass's fractions. */
  get sdFirst(): number {
    return Math.sqrt(this.#moment(this.#firstSquared, this.#first, this.#first));
  }

  get sdSecond(): number {
    return Math.sqrt(this.#moment(this.#secondSquared, this.#second, this.#second));
  }

  /** Pearson correlation of the two passes; NaN when one of them is constant. */
  get correlation(): number {
    return this.#moment(this.#product, this.#first, this.#second) / (this.sdFirst * this.sdSecond);
  }

  /** Median of first minus second, linear within its bin of 0.005. */
  get medianDifference(): number {
    return this.#quantile(0.5);
  }

  /** Standard deviation of first minus second from its quartiles, as for a normal distribution. */
  get robustSdDifference(): number {
    return (this.#quantile(0.75) - this.#quantile(0.25)) / (2 * NORMAL_QUARTILE);
  }

  toJSON(): OverlapStatsJson {
    return {
      n: this.#n,
      sums: [
        this.#first.toJSON(),
        this.#second.toJSON(),
        this.#firstSquared.toJSON(),
        this.#secondSquared.toJSON(),
        this.#product.toJSON(),
      ],
      differences: [...this.#differences.entries()].filter(([, count]) => count > 0),
    };
  }

  static fromJSON(json: OverlapStatsJson): OverlapStats {
    const stats = new OverlapStats();
    stats.#n = json.n;
    stats.#first = ExactSum.fromJSON(json.sums[0]);
    stats.#second = ExactSum.fromJSON(json.sums[1]);
    stats.#firstSquared = ExactSum.fromJSON(json.sums[2]);
    stats.#secondSquared = ExactSum.fromJSON(json.sums[3]);
    stats.#product = ExactSum.fromJSON(json.sums[4]);
    for (const [bin, count] of json.differences) stats.#differences[bin] = count;
    return stats;
  }

  /** Central second moment, from n sum(xy) - sum(x) sum(y) in whole numbers: no cancellation. */
  #moment(products: ExactSum, x: ExactSum, y: ExactSum): number {
    const scaled = BigInt(this.#n) * products.total() - x.total() * y.total();
    return Number(scaled) / (this.#n * STEPS_PER_UNIT) ** 2;
  }

  #quantile(share: number): number {
    if (this.#n === 0) return Number.NaN;
    const wanted = share * this.#n;
    let below = 0;
    let bin = 0;
    while (below + this.#differences[bin] < wanted) {
      below += this.#differences[bin];
      bin += 1;
    }
    const within = (wanted - below) / this.#differences[bin];
    return (BIN_FROM_STEPS + (bin + within) * BIN_STEPS) / STEPS_PER_UNIT;
  }
}

/**
 * Adds the pixels of one tile: fractions of the first and second pass, NaN where there is none; with `stable`,
 * only the pixels where it is 1.
 *
 * @throws INTERNAL when the planes differ in length.
 */
export function addOverlap(stats: OverlapStats, first: Float32Array, second: Float32Array, stable?: Uint8Array): void {
  if (first.length !== second.length || (stable !== undefined && stable.length !== first.length)) {
    throw new BasinloomError('INTERNAL', { detail: 'overlap planes differ in length' });
  }
  for (let at = 0; at < first.length; at += 1) {
    if (stable === undefined || stable[at] === 1) stats.add(first[at], second[at]);
  }
}

export interface StableOptions {
  /** @defaultValue 0.1 */
  readonly maxNdviChange?: number;
  /** With this and both datum temperatures: pixels whose temperature changed by more, K, are not stable. */
  readonly maxTemperatureChangeK?: number;
  readonly datumFirst?: Float32Array;
  readonly datumSecond?: Float32Array;
}

/**
 * Pixels on which two passes may be compared: 1 where both have a fraction and their NDVI differs by less than
 * `maxNdviChange`, else 0. A crop that was cut or a flood between the dates is a true change and must not pull
 * the calibrations together (pseudo-invariant pixels: Schott, Salvaggio & Volchok 1988, Remote Sens. Environ.
 * 26:1-16). The limit of 0.1 is common practice.
 */
export function stablePixels(
  fractionFirst: Float32Array,
  fractionSecond: Float32Array,
  ndviFirst: Float32Array,
  ndviSecond: Float32Array,
  options: StableOptions = {},
): Uint8Array {
  const maxNdviChange = options.maxNdviChange ?? 0.1;
  const { datumFirst, datumSecond, maxTemperatureChangeK } = options;
  const stable = new Uint8Array(fractionFirst.length);
  for (let at = 0; at < stable.length; at += 1) {
    const both = Number.isFinite(fractionFirst[at] + fractionSecond[at]);
    if (!both || !(Math.abs(ndviFirst[at] - ndviSecond[at]) < maxNdviChange)) continue;
    if (datumFirst !== undefined && datumSecond !== undefined && maxTemperatureChangeK !== undefined) {
      if (!(Math.abs(datumFirst[at] - datumSecond[at]) <= maxTemperatureChangeK)) continue;
    }
    stable[at] = 1;
  }
  return stable;
}
