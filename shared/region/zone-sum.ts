import { ExactSum } from './exact-sum.ts';

/** JSON form: exact, and the same for equal sums, so files of it do not depend on tiling or order either. */
export interface ZoneAccumulatorJson {
  readonly touched: number;
  readonly whole: number;
  readonly wholeValid: number;
  /** Decimal text: outgrows a double over a large basin. */
  readonly wholeSum: string;
  readonly edgeArea: readonly number[];
  readonly edgeValid: readonly number[];
  readonly edgeSum: readonly number[];
}

/**
 * Sums of stored integer values over a zone, each pixel weighted with its area share. Whole pixels are summed as
 * integers, edge pixels by exact floating-point sums, so the result is the same bits whatever the tiling and the
 * order of merging. The mean of a zone is `sum / validPixels`, its coverage `validPixels / areaPixels`.
 */
export class ZoneAccumulator {
  #touched = 0;
  #whole = 0;
  #wholeValid = 0;
  #wholeSum = 0n;
  #edgeArea = new ExactSum();
  #edgeValid = new ExactSum();
  #edgeSum = new ExactSum();

  /**
   * Adds the pixels of a tile.
   *
   * @param values stored values: integers of at most 16 bits; `nodata` marks those without one
   * @param share area share of each pixel, 0..1
   * @param include 1 for the pixels that count; all when absent
   */
  addTile(values: ArrayLike<number>, nodata: number | null, share: Float64Array, include?: Uint8Array): void {
    // A tile's whole sum stays far below 2^53: at most 2^20 pixels of at most 2^16.
    let sum = 0;
    for (let i = 0; i < share.length; i++) {
      const weight = share[i];
      if (weight === 0 || (include && !include[i])) continue;
      this.#touched++;
      const value = values[i];
      if (weight === 1) {
        this.#whole++;
        if (value === nodata) continue;
        this.#wholeValid++;
        sum += value;
      } else {
        this.#edgeArea.add(weight);
        if (value === nodata) continue;
        this.#edgeValid.add(weight);
        this.#edgeSum.add(weight * value);
      }
    }
    this.#wholeSum += BigInt(sum);
  }

  merge(other: ZoneAccumulator): void {
    this.#touched += other.#touched;
    this.#whole += other.#whole;
    this.#wholeValid += other.#wholeValid;
    this.#wholeSum += other.#wholeSum;
    this.#edgeArea.merge(other.#edgeArea);
    this.#edgeValid.merge(other.#edgeValid);
    this.#edgeSum.merge(other.#edgeSum);
  }

  /** Pixels touched, whole or in part. */
  get touchedPixels(): number {
    return this.#touched;
  }

  /** Sum of shares: the area of the zone in pixels. */
  get areaPixels(): number {
    return total(this.#edgeArea, BigInt(this.#whole));
  }

  /** Sum of the shares of the pixels that have a value. */
  get validPixels(): number {
    return total(this.#edgeValid, BigInt(this.#wholeValid));
  }

  /** Sum of share times stored value. */
  get sum(): number {
    return total(this.#edgeSum, this.#wholeSum);
  }

  toJSON(): ZoneAccumulatorJson {
    return {
      touched: this.#touched,
      whole: this.#whole,
      wholeValid: this.#wholeValid,
      wholeSum: String(this.#wholeSum),
      edgeArea: this.#edgeArea.parts,
      edgeValid: this.#edgeValid.parts,
      edgeSum: this.#edgeSum.parts,
    };
  }

  static fromJSON(json: ZoneAccumulatorJson): ZoneAccumulator {
    const made = new ZoneAccumulator();
    made.#touched = json.touched;
    made.#whole = json.whole;
    made.#wholeValid = json.wholeValid;
    made.#wholeSum = BigInt(json.wholeSum);
    made.#edgeArea = new ExactSum(json.edgeArea);
    made.#edgeValid = new ExactSum(json.edgeValid);
    made.#edgeSum = new ExactSum(json.edgeSum);
    return made;
  }
}

/** Both parts of a sum together, rounded once. */
function total(edge: ExactSum, whole: bigint): number {
  const sum = new ExactSum(edge.parts);
  const rounded = Number(whole);
  sum.add(rounded);
  sum.add(Number(whole - BigInt(rounded)));
  return sum.value;
}
