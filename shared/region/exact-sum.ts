import { Adder } from 'd3-array';

/**
 * A sum of floating-point numbers without rounding, as a short list of parts (Shewchuk 1997, Discrete Comput. Geom.
 * 18:305-363). The same terms give the same sum in whatever order and grouping they arrive.
 */
export class ExactSum {
  #parts: number[] = [];

  /** @param parts as `parts` gave them */
  constructor(parts: readonly number[] = []) {
    for (const part of parts) this.add(part);
  }

  /** Adds a finite number: the growing expansion of the paper, parts stay non-overlapping, smallest first. */
  add(term: number): void {
    let x = term;
    let kept = 0;
    for (const part of this.#parts) {
      const [big, small] = Math.abs(x) >= Math.abs(part) ? [x, part] : [part, x];
      const sum = big + small;
      const rest = small - (sum - big);
      if (rest !== 0) this.#parts[kept++] = rest;
      x = sum;
    }
    this.#parts.length = kept;
    if (x !== 0) this.#parts.push(x);
  }

  merge(other: ExactSum): void {
    // A copy: the parts of a sum that is merged with itself change on the way.
    for (const part of [...other.#parts]) this.add(part);
  }

  /** The sum, correctly rounded. */
  get value(): number {
    // The adder's rounding also gets ties right, which adding up the parts would not.
    const adder = new Adder();
    for (const part of this.#parts) adder.add(part);
    return adder.valueOf();
  }

  /**
   * The sum itself: its rounded value, the rounded rest, and so on until nothing is left. Equal sums have equal
   * parts, however they came about.
   */
  get parts(): readonly number[] {
    const rest = new ExactSum();
    rest.#parts = [...this.#parts];
    const parts: number[] = [];
    while (rest.#parts.length > 0) {
      const value = rest.value;
      parts.push(value);
      rest.add(-value);
    }
    return parts;
  }
}
