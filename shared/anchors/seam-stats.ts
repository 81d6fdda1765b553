import { type Cluster, ClusterMoments, type Estimate } from './cluster-moments.ts';

export interface SeamStatsJson {
  /** Cluster, runs, sum of j, of 2r and of d; in ascending order of the cluster. */
  readonly clusters: readonly (readonly [number, number, number, number, number])[];
  /** Moments of closed clusters, absent when there are none. */
  readonly closed?: readonly string[];
}

export interface SeamResult {
  /** Number of pixel pairs across the seam. */
  readonly count: number;
  readonly meanJump: number;
  /** Mean jump between the neighbours on both sides. */
  readonly meanNeighbourJump: number;
  /** meanJump over meanNeighbourJump: 1 where the seam cannot be seen. */
  readonly ratio: Estimate;
  /** Signed: lower origin minus higher; across a tile edge, left or upper minus right or lower. */
  readonly meanDifference: Estimate;
}

/** Edge of the square blocks of the grid within which runs are not taken for independent, pixels. */
const CLUSTER_PIXELS = 64;
const MAX_BLOCK_COLUMNS = 2 ** 20;

/** The cluster of a run whose pixel x1 has this global address: the same whatever the tiling. */
export const clusterOf = (row: number, column: number): number =>
  Math.floor(row / CLUSTER_PIXELS) * MAX_BLOCK_COLUMNS + Math.floor(column / CLUSTER_PIXELS);

/**
 * Jumps across a seam against the jumps beside it. A run x0 x1 | x2 x3 of stored values, in line across the
 * seam, gives the jump j = |x1 - x2|, the reference r = (|x0 - x1| + |x2 - x3|) / 2 and the signed difference
 * d = x1 - x2.
 *
 * Runs next to one another see the same fields, so confidence rests on clusters: totals over blocks of
 * 64 x 64 pixels. All sums are of whole numbers (2r instead of r) and exact: any merge order gives the same.
 */
export class SeamStats {
  readonly #clusters = new Map<number, Cluster>();
  #closed = new ClusterMoments();

  /** Adds one run of stored values; `sign` -1 turns the signed difference round. */
  add(x0: number, x1: number, x2: number, x3: number, cluster: number, sign: 1 | -1 = 1): void {
    const sums = this.#cluster(cluster);
    sums.n += 1;
    sums.jump += Math.abs(x1 - x2);
    sums.reference += Math.abs(x0 - x1) + Math.abs(x2 - x3);
    sums.difference += sign * (x1 - x2);
  }

  /** Adds all runs of `other`; clusters of the same block become one. */
  merge(other: SeamStats): void {
    for (const [key, from] of other.#clusters) {
      const sums = this.#cluster(key);
      sums.n += from.n;
      sums.jump += from.jump;
      sums.reference += from.reference;
      sums.difference += from.difference;
    }
    this.#closed.merge(other.#closed);
  }

  /** Declares the clusters complete: only their moments are kept, in constant memory. */
  close(): void {
    for (const cluster of this.#clusters.values()) this.#closed.add(cluster);
    this.#clusters.clear();
  }

  /** The seam in units of the product; `scale` is the product's scale. */
  result(scale = 1): SeamResult {
    const moments = new ClusterMoments(this.#closed.toJSON());
    for (const cluster of this.#clusters.values()) moments.add(cluster);
    return {
      count: moments.runs,
      meanJump: moments.meanJump * scale,
      meanNeighbourJump: moments.meanReference * scale,
      ratio: moments.ratio(),
      meanDifference: moments.meanDifference(scale),
    };
  }

  toJSON(): SeamStatsJson {
    const clusters = [...this.#clusters]
      .sort(([a], [b]) => a - b)
      .map(([key, { n, jump, reference, difference }]) => [key, n, jump, reference, difference] as const);
    return { clusters, ...(this.#closed.runs > 0 ? { closed: this.#closed.toJSON() } : {}) };
  }

  static fromJSON(json: SeamStatsJson): SeamStats {
    const stats = new SeamStats();
    for (const [key, n, jump, reference, difference] of json.clusters) {
      stats.#clusters.set(key, { n, jump, reference, difference });
    }
    stats.#closed = new ClusterMoments(json.closed);
    return stats;
  }

  #cluster(key: number): Cluster {
    let sums = this.#clusters.get(key);
    if (sums === undefined) {
      sums = { n: 0, jump: 0, reference: 0, difference: 0 };
      this.#clusters.set(key, sums);
    }
    return sums;
  }
}
