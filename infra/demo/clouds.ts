import type { WorldScale } from './options.ts';
import type { Parcel } from './parcels.ts';
import { covers, type Pass } from './passes.ts';
import { hashUnit, valueNoise } from './random.ts';

/** What hides or spoils a pixel. */
export const SKY = { clear: 0, dilated: 1, shadow: 2, cloud: 3, cirrus: 4 } as const;

interface Blob {
  readonly x: number;
  readonly y: number;
  readonly radius: number;
  readonly stretch: number;
  readonly stream: number;
  readonly cirrus: boolean;
}

/** Width of the rim that is flagged as dilated cloud, m. */
const RIM = 100;

/** Of the dense and of the bare fields, at most this share is hidden: a pass is no use without them. */
const MOST_HIDDEN = 0.35;

/** The clouds of a pass: blobs with ragged edges until the wanted share of the basin is under them. */
export class CloudField {
  readonly #blobs: Blob[] = [];
  readonly #shift: readonly [number, number];
  readonly #seed: number;

  /** @param shadow from a cloud to its shadow, m east and north */
  constructor(
    seed: number,
    pass: Pass,
    scale: WorldScale,
    parcels: readonly Parcel[],
    shadow: readonly [number, number],
  ) {
    this.#seed = seed + pass.stream;
    this.#shift = shadow;
    const inView = parcels.filter(
      ({ x, y }) =>
        Math.abs(x) < scale.halfWidth &&
        Math.abs(y) < scale.halfHeight &&
        pass.swath.rows.some((_, rowIndex) => covers(pass.swath, rowIndex, scale, x, y)),
    );
    const needed = (['lucerne', 'fallow'] as const).map((crop) => inView.filter((parcel) => parcel.crop === crop));
    const largest = 0.16 * scale.halfHeight;
    let missing = pass.cloud * Math.PI * scale.halfWidth * scale.halfHeight;
    for (let k = 0; missing > 0 && k < 60; k++) {
      const random = (n: number) => hashUnit(k, n, this.#seed);
      const radius = Math.min(largest * (0.45 + 0.55 * random(1)), Math.sqrt(missing / Math.PI) + 60);
      const blob = {
        x: (2 * random(2) - 1) * scale.halfWidth,
        y: (2 * random(3) - 1) * scale.halfHeight,
        radius,
        stretch: 0.7 + 0.6 * random(4),
        stream: this.#seed + 7 * k,
        // Thin high cloud that only the newer sensor flags as such.
        cirrus: pass.swath.sensor === 'oli' && k % 4 === 3,
      };
      this.#blobs.push(blob);
      if (needed.some((fields) => this.#shareHidden(fields) > MOST_HIDDEN)) {
        this.#blobs.pop();
        continue;
      }
      missing -= Math.PI * radius * radius;
    }
  }

  #shareHidden(fields: readonly Parcel[]): number {
    return fields.filter(({ x, y }) => this.at(x, y) !== SKY.clear).length / fields.length;
  }

  at(x: number, y: number): number {
    let found: number = SKY.clear;
    for (const blob of this.#blobs) {
      const inside = depth(blob, x, y);
      if (inside > 0) return blob.cirrus ? SKY.cirrus : SKY.cloud;
      if (blob.cirrus) continue;
      if (inside > -RIM) found = SKY.dilated;
      else if (found === SKY.clear && depth(blob, x - this.#shift[0], y - this.#shift[1]) > -RIM / 2)
        found = SKY.shadow;
    }
    return found;
  }
}

/** Distance inside the edge of a blob, m; negative outside. */
function depth(blob: Blob, x: number, y: number): number {
  const dx = (x - blob.x) / blob.stretch;
  const dy = (y - blob.y) * blob.stretch;
  const farthest = 1.3 * blob.radius + RIM;
  if (dx > farthest || dx < -farthest || dy > farthest || dy < -farthest) return -Infinity;
  const reach = Math.sqrt(dx * dx + dy * dy);
  return blob.radius * (1 + 0.3 * valueNoise(x / (0.5 * blob.radius), y / (0.5 * blob.radius), blob.stream)) - reach;
}
