import { PRODUCTS, type ProductEntry } from '../../../../shared/contract/products.ts';
import { PALETTES, paletteHex } from '../../palettes.ts';
import { type MapStyle, NODATA_GROUND, NODATA_STRIPE } from '../../pictures.ts';
import { niceStep, niceTicks } from '../../scale.ts';
import { type Html, html } from '../html.ts';
import type { MapFigure } from '../model.ts';
import { number, tickText, unitText } from '../numbers.ts';

/** The picture of a map, with outlines and a scale bar drawn over it. */
export function mapDrawing(map: MapFigure, altText: string, size: 'large' | 'small'): Html {
  const { width, height } = map;
  // Strokes and letters in the size at which the picture is shown.
  const unit = width / (size === 'large' ? 330 : 210);
  const bar = scaleBar(map);
  return html`<svg viewBox="0 0 ${width} ${height + 26 * unit}" role="img" aria-label="${altText}">
<image href="data:image/png;base64,${Buffer.from(map.png).toString('base64')}" width="${width}" height="${height}" preserveAspectRatio="none" style="image-rendering:auto"/>
<g fill="none" stroke-linejoin="round">${map.outlines.map(({ kind, path }) =>
    kind === 'boundary'
      ? html`<path d="${path}" stroke="#1f2a2c" stroke-width="${(1.6 * unit).toFixed(2)}"/>`
      : html`<path d="${path}" stroke="#1f2a2c" stroke-width="${(0.8 * unit).toFixed(2)}" stroke-opacity=".75"/>`,
  )}</g>
<g transform="translate(${4 * unit} ${height + 16 * unit})"><path d="M0 ${-5 * unit}V0H${bar.pixels.toFixed(1)}V${-5 * unit}" fill="none" stroke="#1f2a2c" stroke-width="${1.4 * unit}"/><text x="${(bar.pixels + 6 * unit).toFixed(1)}" y="0" font-size="${13 * unit}">${bar.label}</text></g>
</svg>`;
}

/** A round distance, about a quarter of the picture's width. */
function scaleBar(map: MapFigure): { readonly pixels: number; readonly label: string } {
  const metres = niceStep(map.width * map.metresPerPixel, 4);
  const label = metres >= 1000 ? `${number(metres / 1000)} km` : `${number(metres)} m`;
  return { pixels: metres / map.metresPerPixel, label };
}

/** Colour scale in words and numbers. */
export function mapLegend(map: Pick<MapFigure, 'product' | 'style'>): Html {
  const { style } = map;
  const entry: ProductEntry = PRODUCTS[map.product];
  const unit = entry.unit === '1' ? '' : ` ${unitText(entry.unit)}`;
  return html`<div class="legend">${ramp(style, `${entry.title}: ${ticksText(style)}${unit}`)}
<ul class="key"><li>${style.lowWords} (left) to ${style.highWords} (right)${unit === '' ? null : html`, in${unit}`}</li><li>${nodataSwatch()}no usable data</li></ul></div>`;
}

function ramp(style: MapStyle, words: string): Html {
  const steps = 48;
  const ticks = legendTicks(style);
  const [low, high] = style.range;
  const x = (value: number): number => 18 + ((value - low) / (high - low)) * 364;
  return html`<svg viewBox="0 0 400 34" role="img" aria-label="${words}">${Array.from(
    { length: steps },
    (_, i) =>
      html`<rect x="${(18 + (i * 364) / steps).toFixed(2)}" width="${(364 / steps + 0.8).toFixed(2)}" height="13" shape-rendering="crispEdges" fill="${paletteHex(PALETTES[style.palette], i / (steps - 1))}"/>`,
  )}<rect x="18" y=".5" width="364" height="12.5" fill="none" stroke="#4d5a5c" stroke-width=".8"/>${ticks.map(
    (tick) =>
      html`<path d="M${x(tick).toFixed(1)} 13V17" stroke="#1f2a2c"/><text x="${x(tick).toFixed(1)}" y="31" font-size="14" text-anchor="middle">${tickText(tick)}</text>`,
  )}</svg>`;
}

function legendTicks({ range: [low, high] }: MapStyle): readonly number[] {
  return niceTicks(low, high, 5);
}

function ticksText(style: MapStyle): string {
  const ticks = legendTicks(style);
  return `${tickText(ticks[0])} (${style.lowWords}) to ${tickText(ticks[ticks.length - 1])} (${style.highWords})`;
}

function nodataSwatch(): Html {
  return html`<svg viewBox="0 0 28 18" aria-hidden="true"><rect width="28" height="18" fill="${NODATA_GROUND}"/><path d="M-4 10L8 -2M2 18L20 0M12 22L32 2" stroke="${NODATA_STRIPE}" stroke-width="3"/><rect x=".5" y=".5" width="27" height="17" fill="none" stroke="#4d5a5c"/></svg>`;
}
