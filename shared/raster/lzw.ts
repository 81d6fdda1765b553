const CLEAR = 256;
const END = 257;
const FIRST_CODE = 258;
const LONGEST = 12;

/**
 * TIFF LZW (TIFF 6.0 section 13), most significant bit first. Gives at most `length` bytes, fewer when the input ends
 * before.
 *
 * @throws Error for a code that the table cannot hold
 */
export function decodeLzw(input: Uint8Array, length: number): Uint8Array {
  const out = new Uint8Array(length);
  const table = new CodeTable();
  let width = 9;
  let previous = -1;
  let buffer = 0;
  let bits = 0;
  let at = 0;
  let written = 0;
  while (written < length) {
    while (bits < width && at < input.length) {
      buffer = ((buffer << 8) | input[at++]) & 0xffffff;
      bits += 8;
    }
    if (bits < width) break;
    bits -= width;
    const code = (buffer >> bits) & ((1 << width) - 1);
    if (code === END) break;
    if (code === CLEAR) {
      table.clear();
      width = 9;
      previous = -1;
      continue;
    }
    if (previous >= 0) table.add(previous, code);
    written = table.write(code, out, written);
    // The writer goes over to longer codes one entry early.
    if (table.next >= (1 << width) - 1 && width < LONGEST) width++;
    previous = code;
  }
  return out.subarray(0, written);
}

/** Strings by code: each is an earlier string and one byte more. */
class CodeTable {
  readonly #prefix = new Uint16Array(1 << LONGEST);
  readonly #last = new Uint8Array(1 << LONGEST);
  readonly #first = new Uint8Array(1 << LONGEST);
  readonly #size = new Uint16Array(1 << LONGEST);
  next = FIRST_CODE;

  constructor() {
    for (let code = 0; code < CLEAR; code++) {
      this.#last[code] = code;
      this.#first[code] = code;
      this.#size[code] = 1;
    }
  }

  clear(): void {
    this.next = FIRST_CODE;
  }

  /** Enters the string of `previous` and the first byte of `code`, which may be the very string that is entered. */
  add(previous: number, code: number): void {
    if (code > this.next) throw new Error(`LZW code ${code} before its time`);
    // A full table stays as it is until the writer clears it.
    if (this.next >= this.#prefix.length) return;
    this.#prefix[this.next] = previous;
    this.#first[this.next] = this.#first[previous];
    this.#last[this.next] = this.#first[code === this.next ? previous : code];
    this.#size[this.next] = this.#size[previous] + 1;
    this.next++;
  }

  /** Writes the string of a code from `start`; what does not fit is left out. Gives the end of what was written. */
  write(code: number, out: Uint8Array, start: number): number {
    if (code >= this.next) throw new Error(`LZW code ${code} before its time`);
    const end = start + this.#size[code];
    let current = code;
    for (let position = end - 1; position >= start; position--) {
      if (position < out.length) out[position] = this.#last[current];
      current = this.#prefix[current];
    }
    return Math.min(end, out.length);
  }
}
