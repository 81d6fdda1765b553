import type { AnchorRecord } from '../../../../shared/contract/calibration.ts';
import type { ScatterCounts } from '../../../../shared/contract/run-summary.ts';
import { toHex } from '../../colour.ts';
import { niceRange, niceTicks } from '../../scale.ts';
import { type Html, html } from '../html.ts';
import { number } from '../numbers.ts';

const WIDTH = 460;
const HEIGHT = 270;
const LEFT = 46;
const RIGHT = 12;
const TOP = 12;
const BOTTOM = 40;

/** Colour and form of an anchor: told apart by form as well. */
export const ANCHOR_INK = { hot: '#98291b', cold: '#12565f' } as const;

/**
 * Pixels of a pass over NDVI and datum temperature, darker where more of them lie, with the anchors on top: hot
 * as triangles, cold as squares.
 */
export function scatterPlot(grid: ScatterCounts, anchors: readonly AnchorRecord[], title: string): Html {
  const filled = filledCells(grid);
  const temperatures = [...filled.map(({ temperature }) => temperature), ...anchors.map((a) => a.datumTemperature)];
  const ndvis = [...filled.map(({ ndvi }) => ndvi), ...anchors.map((a) => a.ndvi)];
  if (temperatures.length === 0) return html`<p class="note">No clear pixel to plot.</p>`;
  const [coldest, hottest] = niceRange(least(temperatures), greatest(temperatures));
  const [barest, greenest] = niceRange(Math.min(0, least(ndvis)), Math.max(0.8, greatest(ndvis)));
  const x = (ndvi: number): number => LEFT + ((ndvi - barest) / (greenest - barest)) * (WIDTH - LEFT - RIGHT);
  const y = (kelvin: number): number => TOP + ((hottest - kelvin) / (hottest - coldest)) * (HEIGHT - TOP - BOTTOM);
  const cellWidth = x(grid.ndviStep) - x(0);
  const cellHeight = y(0) - y(grid.temperatureStepK);
  return html`<svg class="chart" viewBox="0 0 ${WIDTH} ${HEIGHT}" role="img" aria-label="${title}">
${niceTicks(barest, greenest, 5).map((tick) => html`<path d="M${x(tick).toFixed(1)} ${TOP}V${HEIGHT - BOTTOM}" stroke="#eeebe2"/><text x="${x(tick).toFixed(1)}" y="${HEIGHT - BOTTOM + 16}" font-size="12" text-anchor="middle">${number(tick, 1)}</text>`)}
${niceTicks(coldest, hottest, 4).map((tick) => html`<path d="M${LEFT} ${y(tick).toFixed(1)}H${WIDTH - RIGHT}" stroke="#eeebe2"/><text x="${LEFT - 6}" y="${(y(tick) + 4).toFixed(1)}" font-size="12" text-anchor="end">${number(tick)}</text>`)}
<g shape-rendering="crispEdges">${filled.map(({ ndvi, temperature, weight }) => html`<rect x="${(x(ndvi) - cellWidth / 2).toFixed(1)}" y="${(y(temperature) - cellHeight / 2).toFixed(1)}" width="${(cellWidth + 0.6).toFixed(1)}" height="${(cellHeight + 0.6).toFixed(1)}" fill="${shade(weight)}"/>`)}</g>
${anchors.map((anchor) => anchorMark(anchor.role, x(anchor.ndvi), y(anchor.datumTemperature)))}
<text x="${(LEFT + WIDTH - RIGHT) / 2}" y="${HEIGHT - 6}" font-size="12" text-anchor="middle">NDVI</text>
<text x="12" y="${(TOP + HEIGHT - BOTTOM) / 2}" font-size="12" text-anchor="middle" transform="rotate(-90 12 ${(TOP + HEIGHT - BOTTOM) / 2})">datum temperature, K</text>
</svg>`;
}

/** Ink on white, as a colour of its own: cells may overlap a little, so that no gap shows between them. */
function shade(weight: number): string {
  return toHex([1 - weight * 0.88, 1 - weight * 0.84, 1 - weight * 0.83]);
}

function anchorMark(role: AnchorRecord['role'], x: number, y: number): Html {
  const at = `translate(${x.toFixed(1)} ${y.toFixed(1)})`;
  const shape = role === 'hot' ? 'M0 -7L7 5H-7Z' : 'M-5.5 -5.5H5.5V5.5H-5.5Z';
  return html`<path d="${shape}" transform="${at}" fill="${ANCHOR_INK[role]}" stroke="#ffffff" stroke-width="1.5"/>`;
}

interface Cell {
  readonly ndvi: number;
  readonly temperature: number;
  readonly weight: number;
}

/** Cells with pixels, shaded by the root of their count so that sparse edges stay visible. */
function filledCells(grid: ScatterCounts): readonly Cell[] {
  let most = 0;
  for (let i = 0; i < grid.counts.length; i++) most = Math.max(most, grid.counts[i]);
  const cells: Cell[] = [];
  for (let i = 0; i < grid.counts.length; i++) {
    if (!(grid.counts[i] > 0)) continue;
    cells.push({
      ndvi: grid.ndviStart + ((i % grid.columns) + 0.5) * grid.ndviStep,
      temperature: grid.temperatureStartK + (Math.floor(i / grid.columns) + 0.5) * grid.temperatureStepK,
      weight: 0.08 + 0.72 * Math.sqrt(grid.counts[i] / most),
    });
  }
  return cells;
}

const least = (values: readonly number[]): number => values.reduce((a, b) => Math.min(a, b));
const greatest = (values: readonly number[]): number => values.reduce((a, b) => Math.max(a, b));
