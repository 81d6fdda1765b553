/** A colour in sRGB, each channel 0..1. */
export type Rgb = readonly [number, number, number];

/** A colour in OKLab: lightness 0..1, green-red, blue-yellow. */
export type Lab = readonly [number, number, number];

/**
 * OKLab (Ottosson 2020, "A perceptual color space for image processing"): a space in which equal distances look
 * about equal. Used to space the palettes evenly.
 */
export function rgbToLab([red, green, blue]: Rgb): Lab {
  const r = toLinear(red);
  const g = toLinear(green);
  const b = toLinear(blue);
  const l = Math.cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b);
  const m = Math.cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b);
  const s = Math.cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b);
  return [
    0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s,
    1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s,
    0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s,
  ];
}

/** Inverse of {@link rgbToLab}; channels of a colour that no screen shows fall outside 0..1. */
export function labToRgb([lightness, a, b]: Lab): Rgb {
  const l = (lightness + 0.3963377774 * a + 0.2158037573 * b) ** 3;
  const m = (lightness - 0.1055613458 * a - 0.0638541728 * b) ** 3;
  const s = (lightness - 0.0894841775 * a - 1.291485548 * b) ** 3;
  return [
    fromLinear(4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s),
    fromLinear(-1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s),
    fromLinear(-0.0041960863 * l - 0.7034186147 * m + 1.707614701 * s),
  ];
}

/** OKLab from lightness 0..1, chroma, and hue in degrees. */
export function polarLab(lightness: number, chroma: number, hueDeg: number): Lab {
  const hue = (hueDeg * Math.PI) / 180;
  return [lightness, chroma * Math.cos(hue), chroma * Math.sin(hue)];
}

export function labDistance(p: Lab, q: Lab): number {
  return Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2]);
}

/** Whole channel values 0..255; what lies outside the screen's gamut is brought to its edge. */
export function toBytes(rgb: Rgb): readonly [number, number, number] {
  const byte = (channel: number): number => Math.round(255 * Math.min(1, Math.max(0, channel)));
  return [byte(rgb[0]), byte(rgb[1]), byte(rgb[2])];
}

export function toHex(rgb: Rgb): string {
  return `#${toBytes(rgb)
    .map((byte) => byte.toString(16).padStart(2, '0'))
    .join('')}`;
}

export function fromHex(hex: string): Rgb {
  const channel = (at: number): number => Number.parseInt(hex.slice(at, at + 2), 16) / 255;
  return [channel(1), channel(3), channel(5)];
}

/** Transfer functions of sRGB (IEC 61966-2-1). */
export function toLinear(channel: number): number {
  return channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4;
}

export function fromLinear(channel: number): number {
  return channel <= 0.0031308 ? channel * 12.92 : 1.055 * channel ** (1 / 2.4) - 0.055;
}
