import { niceTicks } from '../../scale.ts';
import { type Html, html } from '../html.ts';
import { tickText } from '../numbers.ts';

/** The common axis of a column of strips. */
export interface StripAxis {
  readonly low: number;
  readonly high: number;
  /** Logarithmic: equal distances are equal factors. */
  readonly log: boolean;
  /** A line at this value in every strip. */
  readonly reference?: number;
}

export interface StripMark {
  readonly value: number;
  /** Ends of a whisker: a confidence interval, or minimum and maximum. */
  readonly low?: number;
  readonly high?: number;
  /** Filled: the published value. Open: before adjustment. */
  readonly shape: 'filled' | 'open';
  readonly colour: string;
}

const WIDTH = 240;
const MARGIN = 12;

/** Place of a value on the axis; values beyond it lie on its end. */
function place(axis: StripAxis, value: number): number {
  const along = axis.log
    ? (Math.log(value) - Math.log(axis.low)) / (Math.log(axis.high) - Math.log(axis.low))
    : (value - axis.low) / (axis.high - axis.low);
  return MARGIN + Math.min(1, Math.max(0, along)) * (WIDTH - 2 * MARGIN);
}

/** Ticks of an axis: round values, seven at most. */
export function axisTicks(axis: StripAxis): readonly number[] {
  if (axis.log) {
    const candidates = [0.1, 0.2, 0.5, 1, 2, 5, 10, 20, 50, 100];
    return candidates.filter((tick) => tick >= axis.low * 0.999 && tick <= axis.high * 1.001);
  }
  return niceTicks(axis.low, axis.high, 4);
}

/** The head of a column of strips: tick labels. */
export function stripAxis(axis: StripAxis): Html {
  return html`<svg class="axis" viewBox="0 0 ${WIDTH} 24" aria-hidden="true">${axisTicks(axis).map(
    (tick) =>
      html`<path d="M${place(axis, tick).toFixed(1)} 18V24" stroke="#4d5a5c"/><text x="${place(axis, tick).toFixed(1)}" y="14" font-size="11" text-anchor="middle">${tickText(tick)}</text>`,
  )}</svg>`;
}

/**
 * One row of a dot plot. The numbers stand in the cells beside it, so it is hidden from readers of text.
 *
 * @param band shaded part of the axis: what lies within the limit
 */
export function strip(axis: StripAxis, marks: readonly StripMark[], band?: readonly [number, number]): Html {
  const x = (value: number): string => place(axis, value).toFixed(1);
  const shown = marks.filter(({ value }) => Number.isFinite(value) && (!axis.log || value > 0));
  return html`<svg class="strip" viewBox="0 0 ${WIDTH} 20" aria-hidden="true">
<path d="M${MARGIN} 10H${WIDTH - MARGIN}" stroke="#d9d5ca"/>${
    band &&
    html`<rect x="${x(band[0])}" y="2" width="${(place(axis, band[1]) - place(axis, band[0])).toFixed(1)}" height="16" fill="#dcebe6"/>`
  }${
    axis.reference !== undefined && html`<path d="M${x(axis.reference)} 0V20" stroke="#1f2a2c" stroke-dasharray="3 2"/>`
  }${shown.map((mark) => whisker(axis, mark))}${shown.map((mark) => dot(axis, mark))}</svg>`;
}

function whisker(axis: StripAxis, { low, high, colour }: StripMark): Html | null {
  if (low === undefined || high === undefined || !Number.isFinite(low) || !Number.isFinite(high)) return null;
  const from = place(axis, axis.log ? Math.max(low, axis.low) : low);
  return html`<path d="M${from.toFixed(1)} 10H${place(axis, high).toFixed(1)}" stroke="${colour}" stroke-width="2"/>`;
}

function dot(axis: StripAxis, { value, shape, colour }: StripMark): Html {
  const fill = shape === 'filled' ? colour : '#ffffff';
  return html`<circle cx="${place(axis, value).toFixed(1)}" cy="10" r="4.2" fill="${fill}" stroke="${colour}" stroke-width="1.8"/>`;
}
