/** Values this small can be added below the carry limit without leaving the exact integers of a double. */
const CARRY = 2 ** 52;

/**
 * Exact sum of integers, each below 2^52 in magnitude. Order and grouping cannot change it, and there is no
 * largest total. Additions cost one double addition; only a carry touches a bigint.
 */
export class ExactSum {
  #low = 0;
  #high = 0n;

  add(value: number): void {
    this.#low += value;
    if (this.#low >= CARRY || this.#low <= -CARRY) this.#carry();
  }

  merge(other: ExactSum): void {
    this.#high += other.total();
  }

  total(): bigint {
    this.#carry();
    return this.#high;
  }

  /** The total as the nearest double. */
  valueOf(): number {
    return Number(this.total());
  }

  /** Decimal digits, for JSON. */
  toJSON(): string {
    return this.total().toString();
  }

  static fromJSON(digits: string): ExactSum {
    const sum = new ExactSum();
    sum.#high = BigInt(digits);
    return sum;
  }

  #carry(): void {
    this.#high += BigInt(this.#low);
    this.#low = 0;
  }
}
