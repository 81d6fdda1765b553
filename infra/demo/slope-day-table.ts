import { CENTRE_LATITUDE } from './plane.ts';
import { slopeDayRatio } from './sun.ts';

/** Nodes of the table lie this far apart, rise over run, and reach to this on every side. */
const STEP = 0.02;
const REACH = 0.7;
const SIDE = 2 * Math.round(REACH / STEP) + 1;

/**
 * `slopeDayRatio` for one declination at the middle of the basin, from a table with bilinear interpolation: a few
 * parts in 100 000 from the exact value. The latitude of a place in the basin makes a difference of the same size.
 */
export function slopeDayTable(declination: number): (slopeEast: number, slopeNorth: number) => number {
  const latitude = (CENTRE_LATITUDE * Math.PI) / 180;
  const exact = (east: number, north: number) =>
    slopeDayRatio(declination, Math.sin(latitude), Math.cos(latitude), east, north);
  const table = new Float64Array(SIDE * SIDE);
  for (let j = 0; j < SIDE; j++) {
    for (let i = 0; i < SIDE; i++) table[j * SIDE + i] = exact(i * STEP - REACH, j * STEP - REACH);
  }
  return (slopeEast, slopeNorth) => {
    const p = (slopeEast + REACH) / STEP;
    const q = (slopeNorth + REACH) / STEP;
    if (!(p >= 0 && q >= 0 && p < SIDE - 1 && q < SIDE - 1)) return exact(slopeEast, slopeNorth);
    const i = Math.floor(p);
    const j = Math.floor(q);
    const at = j * SIDE + i;
    const south = table[at] + (table[at + 1] - table[at]) * (p - i);
    const north = table[at + SIDE] + (table[at + SIDE + 1] - table[at + SIDE]) * (p - i);
    return south + (north - south) * (q - j);
  };
}
