import sharp from 'sharp';
import { PRODUCTS, type ProductName } from '../../shared/contract/products.ts';
import { fromHex, toBytes } from './colour.ts';
import { colourIndex, PALETTES, type PaletteName } from './palettes.ts';
import { niceRange } from './scale.ts';

/** Light ground and stripe of "no usable data". */
export const NODATA_GROUND = '#efece4';
export const NODATA_STRIPE = '#c9c4b6';
/** Stripes across the width of a picture: wide enough to be seen when it is shown small. */
const STRIPES = 42;

export interface MapPicture {
  /** Pixels. */
  readonly width: number;
  readonly height: number;
  /** Row by row; NaN: no usable data (hatched). */
  readonly values: Float32Array;
  /** Values of the first and the last colour. */
  readonly range: readonly [number, number];
  readonly palette: PaletteName;
  /** 0: outside the region, left transparent. Without it every NaN is hatched. */
  readonly inside?: Uint8Array;
}

/** A map as PNG bytes (RGBA). The same values give the same bytes with the same version of the encoder. */
export async function mapPng(picture: MapPicture): Promise<Uint8Array> {
  const { width, height, values, range, inside } = picture;
  const colours = PALETTES[picture.palette].bytes;
  return encode(width, height, (i, out) => {
    if (inside && inside[i] === 0) return;
    if (Number.isNaN(values[i])) return hatch(i, width, out);
    const colour = 3 * colourIndex(values[i], range);
    paint(out, i, colours[colour], colours[colour + 1], colours[colour + 2]);
  });
}

export interface ClassPicture {
  readonly width: number;
  readonly height: number;
  /** Index into `colours`, row by row; 255: no usable data; 254: outside the region. */
  readonly classes: Uint8Array;
  /** "#rrggbb" */
  readonly colours: readonly string[];
}

/** A map of classes (quality flags) as PNG bytes. */
export async function classPng(picture: ClassPicture): Promise<Uint8Array> {
  const { width, height, classes } = picture;
  const colours = picture.colours.map((hex) => toBytes(fromHex(hex)));
  return encode(width, height, (i, out) => {
    if (classes[i] === 254) return;
    const colour = colours[classes[i]];
    if (!colour) return hatch(i, width, out);
    paint(out, i, colour[0], colour[1], colour[2]);
  });
}

async function encode(width: number, height: number, pixel: (i: number, out: Uint8Array) => void): Promise<Uint8Array> {
  const rgba = new Uint8Array(width * height * 4);
  for (let i = 0; i < width * height; i++) pixel(i, rgba);
  return sharp(rgba, { raw: { width, height, channels: 4 } })
    .png({ compressionLevel: 9, adaptiveFiltering: false, palette: false })
    .toBuffer();
}

function paint(out: Uint8Array, i: number, red: number, green: number, blue: number): void {
  out[4 * i] = red;
  out[4 * i + 1] = green;
  out[4 * i + 2] = blue;
  out[4 * i + 3] = 255;
}

const GROUND = toBytes(fromHex(NODATA_GROUND));
const STRIPE = toBytes(fromHex(NODATA_STRIPE));

/** Diagonal stripes: told from every palette colour by their pattern, not by colour alone. */
function hatch(i: number, width: number, out: Uint8Array): void {
  const step = Math.max(5, Math.round(width / STRIPES));
  const across = (i % width) + Math.floor(i / width);
  const [red, green, blue] = across % step < step / 3 ? STRIPE : GROUND;
  paint(out, i, red, green, blue);
}

/** How a product is shown: palette, range, and what its ends mean in words. */
export interface MapStyle {
  readonly palette: PaletteName;
  readonly range: readonly [number, number];
  readonly lowWords: string;
  readonly highWords: string;
}

/**
 * The style of a product. Fractions and ratios always run from 0 to 1.1, so that maps of different dates can be
 * compared; other ranges are rounded outward from the given 2nd to 98th percentile (or minimum and maximum).
 */
export function mapStyle(product: ProductName, spread: readonly [number, number]): MapStyle {
  if (product === 'et-ratio' || product === 'et-fraction' || product === 'evaporative-fraction') {
    return { palette: 'ratio', range: [0, 1.1], lowWords: 'far below reference', highWords: 'at reference' };
  }
  if (product === 'et-day' || product === 'et-period') {
    const [, high] = niceRange(0, spread[1]);
    return { palette: 'evaporation', range: [0, high], lowWords: 'dry', highWords: 'evaporating most' };
  }
  if (product === 'observations') {
    return { palette: 'count', range: [0, Math.max(1, spread[1])], lowWords: 'none', highWords: 'most overpasses' };
  }
  if (product === 'longest-gap') {
    const [, high] = niceRange(0, spread[1]);
    return { palette: 'gap', range: [0, high], lowWords: 'short gap', highWords: 'long gap' };
  }
  const heat = { palette: 'heat', range: niceRange(spread[0], spread[1]) } as const;
  const [lowWords, highWords] = PRODUCTS[product].unit === 'K' ? ['cool', 'hot'] : ['low', 'high'];
  return { ...heat, lowWords, highWords };
}
