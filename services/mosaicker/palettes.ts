import { type Lab, labDistance, labToRgb, polarLab, toBytes, toHex } from './colour.ts';

/** Number of colours of a palette. */
export const PALETTE_SIZE = 64;

/** Lattice of points between the anchors, fine enough to measure the path along it. */
const FINE = 1024;

/** An even row of colours from the lowest value to the highest; 64 entries, three bytes each. */
export interface Palette {
  readonly name: PaletteName;
  readonly bytes: Uint8Array;
}

/**
 * Anchor colours as [lightness, chroma, hue in degrees] of OKLab. Lightness runs one way only, so that the order
 * of values can be read without colour vision, and on a grey print.
 */
const ANCHORS = {
  // dry sand, through reed green, to deep water
  evaporation: [
    [0.95, 0.035, 88],
    [0.83, 0.095, 118],
    [0.67, 0.1, 165],
    [0.49, 0.085, 222],
    [0.31, 0.095, 278],
  ],
  // far below the reference: dark wine; at the reference: pale water
  ratio: [
    [0.33, 0.11, 8],
    [0.52, 0.125, 36],
    [0.71, 0.11, 66],
    [0.85, 0.06, 105],
    [0.95, 0.03, 195],
  ],
  // few to many
  count: [
    [0.94, 0.015, 300],
    [0.72, 0.07, 292],
    [0.5, 0.1, 284],
    [0.32, 0.09, 276],
  ],
  // short to long
  gap: [
    [0.95, 0.025, 100],
    [0.78, 0.1, 72],
    [0.58, 0.12, 42],
    [0.36, 0.09, 20],
  ],
  // cool to hot, and any other flux
  heat: [
    [0.28, 0.08, 285],
    [0.47, 0.11, 330],
    [0.65, 0.13, 22],
    [0.82, 0.1, 68],
    [0.96, 0.05, 100],
  ],
} as const satisfies Record<string, readonly (readonly [number, number, number])[]>;

export type PaletteName = keyof typeof ANCHORS;
export const PALETTE_NAMES = Object.keys(ANCHORS) as PaletteName[];

/** The palettes: neighbouring colours are equally far apart in OKLab along each. */
export const PALETTES: Readonly<Record<PaletteName, Palette>> = Object.fromEntries(
  PALETTE_NAMES.map((name) => [name, { name, bytes: paletteBytes(ANCHORS[name]) }]),
) as Record<PaletteName, Palette>;

function paletteBytes(anchors: readonly (readonly [number, number, number])[]): Uint8Array {
  const path = Array.from({ length: FINE + 1 }, (_, i) => between(anchors, i / FINE));
  const travelled = [0];
  for (let i = 1; i <= FINE; i++) travelled.push(travelled[i - 1] + labDistance(path[i - 1], path[i]));
  const total = travelled[FINE];
  const bytes = new Uint8Array(PALETTE_SIZE * 3);
  for (let colour = 0, i = 0; colour < PALETTE_SIZE; colour++) {
    const wanted = (total * colour) / (PALETTE_SIZE - 1);
    while (i < FINE && travelled[i] < wanted) i++;
    bytes.set(toBytes(labToRgb(path[i])), colour * 3);
  }
  return bytes;
}

/** The path through the anchors: straight in lightness, chroma and hue from one to the next. */
function between(anchors: readonly (readonly [number, number, number])[], position: number): Lab {
  const at = position * (anchors.length - 1);
  const i = Math.min(Math.floor(at), anchors.length - 2);
  const t = at - i;
  const [l0, c0, h0] = anchors[i];
  const [l1, c1, h1] = anchors[i + 1];
  // The shorter way round the circle of hues.
  const turn = ((h1 - h0 + 540) % 360) - 180;
  return polarLab(l0 + (l1 - l0) * t, c0 + (c1 - c0) * t, h0 + turn * t);
}

/** Index of the colour of a value; values beyond the range take the end colours. */
export function colourIndex(value: number, [low, high]: readonly [number, number]): number {
  const share = high > low ? (value - low) / (high - low) : 0.5;
  return Math.min(PALETTE_SIZE - 1, Math.max(0, Math.floor(share * PALETTE_SIZE)));
}

/** A colour of a palette as "#rrggbb"; `share` 0 is the lowest value, 1 the highest. */
export function paletteHex(palette: Palette, share: number): string {
  const i = 3 * Math.round(Math.min(1, Math.max(0, share)) * (PALETTE_SIZE - 1));
  return toHex([palette.bytes[i] / 255, palette.bytes[i + 1] / 255, palette.bytes[i + 2] / 255]);
}

/** Colours of classes (quality flags, states): far apart for any colour vision, told apart by lightness too. */
export const FLAG_COLOURS = {
  usable: toHex(labToRgb(polarLab(0.72, 0.08, 195))),
  adjusted: toHex(labToRgb(polarLab(0.56, 0.09, 225))),
  borrowed: toHex(labToRgb(polarLab(0.42, 0.12, 300))),
  clipped: toHex(labToRgb(polarLab(0.83, 0.13, 88))),
  cloud: toHex(labToRgb(polarLab(0.92, 0.01, 250))),
  outside: toHex(labToRgb(polarLab(0.62, 0.012, 80))),
  rejected: toHex(labToRgb(polarLab(0.5, 0.14, 30))),
} as const;

export type FlagName = keyof typeof FLAG_COLOURS;
