/** Items by bucket: list[start[b]] .. list[start[b + 1] - 1] are those of bucket b, in the order in which they came. */
export interface Buckets {
  readonly start: Uint32Array;
  readonly list: Uint32Array;
}

/**
 * Sorts items into buckets without an array for each.
 *
 * @param visit calls `take` for every pair of bucket and item; it is run twice and must do the same both times
 */
export function intoBuckets(count: number, visit: (take: (bucket: number, item: number) => void) => void): Buckets {
  const start = new Uint32Array(count + 1);
  visit((bucket) => start[bucket + 1]++);
  for (let bucket = 0; bucket < count; bucket++) start[bucket + 1] += start[bucket];
  const next = start.slice();
  const list = new Uint32Array(start[count]);
  visit((bucket, item) => {
    list[next[bucket]++] = item;
  });
  return { start, list };
}
