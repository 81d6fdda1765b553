import type { WorldScale } from './options.ts';
import { roughNoise, smoothStep, valueNoise } from './random.ts';

export interface Terrain {
  /** m above sea level. */
  elevation(x: number, y: number): number;
  /** 0 on the plain .. 1 on the rim. */
  hilliness(x: number, y: number): number;
  /** Distance to the shore of the lake, m; negative on the water. */
  shore(x: number, y: number): number;
}

/** The plain at the centre, m. */
const PLAIN = 95;
/** Fall of the plain toward the outlet in the south-east, m per m. */
const FALL = 0.0012;
const OUTLET = [0.8, -0.6] as const;

/** A bowl of hills around a gentle plain, open toward the south-east, with one lake. */
export function makeTerrain(seed: number, scale: WorldScale): Terrain {
  const { halfWidth, halfHeight, relief } = scale;
  const lake = { x: 0.14 * halfWidth, y: -0.2 * halfHeight, a: 0.115 * halfWidth + 90, b: 0.09 * halfHeight + 70 };
  const lakeLevel = PLAIN - FALL * (lake.x * OUTLET[0] + lake.y * OUTLET[1]) - 2;

  const hilliness = (x: number, y: number): number => {
    const u = x / halfWidth;
    const v = y / halfHeight;
    const radius = Math.sqrt(u * u + v * v);
    const toOutlet = (u * OUTLET[0] + v * OUTLET[1]) / (radius + 0.05);
    const open = 1 - 0.9 * smoothStep(0.35, 0.95, toOutlet);
    return smoothStep(0.52, 1.2, radius + 0.12 * valueNoise(u * 2.2, v * 2.2, seed + 11)) * open;
  };
  const shore = (x: number, y: number): number => {
    const [u, v] = [(x - lake.x) / lake.a, (y - lake.y) / lake.b];
    const reach = Math.sqrt(u * u + v * v) - 1;
    if (reach > 3) return reach * Math.min(lake.a, lake.b);
    return reach * Math.min(lake.a, lake.b) + 0.12 * lake.b * valueNoise(x / 500, y / 500, seed + 12);
  };
  const elevation = (x: number, y: number): number => {
    const hills = hilliness(x, y);
    const ridges = hills === 0 ? 0 : hills * (0.72 + 0.28 * roughNoise(x / 2600, y / 2600, seed + 13));
    const rolling = (1 - hills) * 1.5 + hills * 9;
    const land =
      PLAIN -
      FALL * (x * OUTLET[0] + y * OUTLET[1]) +
      relief * ridges +
      rolling * valueNoise(x / 1100, y / 1100, seed + 15);
    const wet = 1 - smoothStep(0, 260, shore(x, y));
    return land + (lakeLevel - land) * wet;
  };
  return { elevation, hilliness, shore };
}
