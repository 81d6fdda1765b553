import { toPlane } from './plane.ts';

export interface Raster {
  /** Upper-left corner of the first pixel, m, and the edge of the square pixels. */
  readonly left: number;
  readonly top: number;
  readonly pixel: number;
  readonly width: number;
  readonly height: number;
}

/** Distance between exact points of the map transform, pixels; the error between them is a few millimetres. */
const NODE = 16;

/**
 * Place on the world's map of every pixel centre of a projected raster, row by row: exact at nodes, bilinear between.
 *
 * @param inverse map coordinates to longitude and latitude
 */
export function planeCoordinates(
  raster: Raster,
  inverse: (point: [number, number]) => number[],
): { x: Float32Array; y: Float32Array } {
  const { width, height } = raster;
  const nodes = exactNodes(raster, inverse);
  const stride = 2 * nodesAlong(width);
  const x = new Float32Array(width * height);
  const y = new Float32Array(x.length);
  for (let row = 0, at = 0; row < height; row++) {
    const j = Math.floor(row / NODE);
    const v = row / NODE - j;
    for (let column = 0; column < width; column++, at++) {
      const i = Math.floor(column / NODE);
      const u = column / NODE - i;
      const a = j * stride + 2 * i;
      const b = a + stride;
      x[at] = mix(mix(nodes[a], nodes[a + 2], u), mix(nodes[b], nodes[b + 2], u), v);
      y[at] = mix(mix(nodes[a + 1], nodes[a + 3], u), mix(nodes[b + 1], nodes[b + 3], u), v);
    }
  }
  return { x, y };
}

const nodesAlong = (pixels: number): number => Math.ceil(pixels / NODE) + 1;

function exactNodes(raster: Raster, inverse: (point: [number, number]) => number[]): Float64Array {
  const [across, down] = [nodesAlong(raster.width), nodesAlong(raster.height)];
  const nodes = new Float64Array(2 * across * down);
  for (let j = 0; j < down; j++) {
    for (let i = 0; i < across; i++) {
      const easting = raster.left + (i * NODE + 0.5) * raster.pixel;
      const northing = raster.top - (j * NODE + 0.5) * raster.pixel;
      const [longitude, latitude] = inverse([easting, northing]);
      nodes.set(toPlane(longitude, latitude), 2 * (j * across + i));
    }
  }
  return nodes;
}

function mix(a: number, b: number, t: number): number {
  return a + (b - a) * t;
}
