/** PackBits, TIFF 6.0 section 9. Gives at most `length` bytes, fewer when the input ends before. */
export function unpackBits(input: Uint8Array, length: number): Uint8Array {
  const out = new Uint8Array(length);
  let written = 0;
  for (let at = 0; at < input.length && written < length; ) {
    const count = (input[at++] << 24) >> 24;
    if (count >= 0) {
      const run = input.subarray(at, at + Math.min(count + 1, length - written));
      out.set(run, written);
      at += count + 1;
      written += run.length;
    } else if (count !== -128 && at < input.length) {
      const end = Math.min(length, written + 1 - count);
      out.fill(input[at++], written, end);
      written = end;
    }
  }
  return out.subarray(0, written);
}
