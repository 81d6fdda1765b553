export interface BenchResult {
  /** Ours over the yardstick's rate, both measured in this call; `run.floor` is our time over the floor's. */
  readonly ratios: Readonly<Record<string, number>>;
  /** What was measured, and what could not be. */
  readonly notes: readonly string[];
}

export function median(values: readonly number[]): number {
  const sorted = values.toSorted((a, b) => a - b);
  return sorted[sorted.length >> 1];
}
