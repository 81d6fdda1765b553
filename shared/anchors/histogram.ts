/** Shares and quantiles of counts over equal bins. Counts are whole numbers, so all of this is exact until a division. */

export const totalOf = (counts: ArrayLike<number>): number => {
  let total = 0;
  for (let i = 0; i < counts.length; i += 1) total += counts[i];
  return total;
};

/** Index of the last bin of the fewest lowest bins that hold at least `share` of the counts; -1 without counts. */
export function lowestShare(counts: ArrayLike<number>, share: number): number {
  const total = totalOf(counts);
  if (total === 0) return -1;
  let held = 0;
  for (let i = 0; i < counts.length; i += 1) {
    held += counts[i];
    if (held > 0 && held >= share * total) return i;
  }
  return counts.length - 1;
}

/** Index of the first bin of the fewest highest bins that hold at least `share` of the counts; -1 without counts. */
export function highestShare(counts: ArrayLike<number>, share: number): number {
  const total = totalOf(counts);
  if (total === 0) return -1;
  let held = 0;
  for (let i = counts.length - 1; i >= 0; i -= 1) {
    held += counts[i];
    if (held > 0 && held >= share * total) return i;
  }
  return 0;
}

/** Position of a quantile in bins (2.5: the middle of bin 2), linear within a bin; NaN without counts. */
export function quantilePosition(counts: ArrayLike<number>, share: number): number {
  const wanted = share * totalOf(counts);
  let below = 0;
  for (let i = 0; i < counts.length; i += 1) {
    if (counts[i] > 0 && below + counts[i] >= wanted) return i + (wanted - below) / counts[i];
    below += counts[i];
  }
  return Number.NaN;
}
