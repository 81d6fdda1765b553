import { DAY_QUALITY_BITS, PERIOD_QUALITY_BITS, type QualityBit } from '../../../../shared/contract/quality.ts';
import { FLAG_COLOURS } from '../../palettes.ts';
import { meter } from '../charts/meter.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { day, number, percent, periodName } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** What the numbers rest on: observations, gaps, cloud, and what was clipped, borrowed or adjusted. */
export function qualitySection(model: ReportModel): Html {
  return html`<section id="quality" aria-labelledby="quality-title">
<h2 id="quality-title">What the numbers rest on</h2>
<p>Nothing is masked, filled, clipped or borrowed without a bit in the quality layer. The shares below are of the
basin's pixels; one pixel may count in several columns.</p>
${model.periods.length > 0 ? periodTable(model) : html`<p class="none">No period was accounted.</p>`}
${model.days.length > 0 ? dayTable(model) : html`<p class="none">No overpass date was usable.</p>`}
</section>`;
}

function periodTable(model: ReportModel): Html {
  const bits = present(
    PERIOD_QUALITY_BITS.filter(({ name }) => name !== 'outside-region'),
    model.periods,
  );
  return html`${scrollTable(
    html`By period: overpasses, gaps between them, and quality bits.`,
    'Data quality by period',
    html`<thead><tr><th scope="col">Period</th><th scope="col" class="num">Covered</th><th scope="col" class="num">Overpasses <small>least, mean, most</small></th><th scope="col" class="num">Longest gap <small>mean, most; days</small></th>${bits.map(head)}</tr></thead>
<tbody>${model.periods.map(
      (row) =>
        html`<tr><th scope="row">${periodName(row)}</th><td class="num">${percent(row.usable / row.regionPixels)}</td><td class="num">${number(row.observationsMin)}, ${number(row.observationsMean, 1)}, ${number(row.observationsMax)}</td><td class="num">${number(row.longestGapDaysMean, 1)}, ${number(row.longestGapDaysMax)}</td>${bits.map(({ name }) => share(row.bits[name], row.regionPixels))}</tr>`,
    )}</tbody>`,
  )}${meanings(bits)}`;
}

function dayTable(model: ReportModel): Html {
  const bits = present(DAY_QUALITY_BITS, model.days);
  return html`<h3>By overpass date</h3>${scrollTable(
    html`By date: usable share and quality bits.`,
    'Data quality by overpass date',
    html`<thead><tr><th scope="col">Date</th><th scope="col">Passes</th><th scope="col" class="num">Usable</th><th scope="col"><span class="unit">share of basin</span></th>${bits.map(head)}</tr></thead>
<tbody>${model.days.map(
      (row) =>
        html`<tr><th scope="row" class="when">${day(row.date)}</th><td>${row.passes.map((pass) => html`<span class="mono code">${pass}</span> `)}</td><td class="num">${percent(row.usable / row.regionPixels)}</td><td>${meter(row.usable / row.regionPixels, FLAG_COLOURS.adjusted)}</td>${bits.map(({ name }) => share(row.bits[name], row.regionPixels))}</tr>`,
    )}</tbody>`,
  )}${meanings(bits)}`;
}

function head({ name }: QualityBit): Html {
  return html`<th scope="col" class="num">${name.replaceAll('-', ' ')}</th>`;
}

function share(pixels: number | undefined, of: number): Html {
  return pixels ? html`<td class="num">${percent(pixels / of, 1)}</td>` : html`<td class="num none">0</td>`;
}

/** Bits that some row has set: a column of zeros says nothing. */
function present(
  bits: readonly QualityBit[],
  rows: readonly { readonly bits: Readonly<Record<string, number>> }[],
): readonly QualityBit[] {
  return bits.filter(({ name }) => rows.some((row) => (row.bits[name] ?? 0) > 0));
}

function meanings(bits: readonly QualityBit[]): Html | null {
  if (bits.length === 0) return html`<p class="note">No quality bit is set.</p>`;
  return html`<details><summary>What the columns mean</summary><dl>${bits.map(({ name, meaning }) => html`<dt><strong>${name.replaceAll('-', ' ')}</strong></dt><dd>${meaning}</dd>`)}</dl></details>`;
}
