import { niceRange } from '../../scale.ts';
import { type StripAxis, strip, stripAxis } from '../charts/strip.ts';
import { type Html, html } from '../html.ts';
import type { AdjustmentReport, ReportModel } from '../model.ts';
import { counted, number, percent, periodName, signed, volume } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** What the joint adjustment between passes did, and what it did to the basin's volume. */
export function adjustmentSection(model: ReportModel): Html {
  return html`<section id="adjustment" aria-labelledby="adjustment-title">
<h2 id="adjustment-title">Adjustment between passes</h2>
${model.adjustment ? content(model.adjustment, model) : html`<p>No adjustment was made in this run.</p>`}
</section>`;
}

function content(adjustment: AdjustmentReport, model: ReportModel): Html {
  const used = adjustment.overlaps.filter(({ cut }) => cut === undefined);
  const cut = adjustment.overlaps.filter((overlap) => overlap.cut !== undefined);
  return html`<p>Where two passes close in time see the same stable land, their fractions should agree. One small
correction for each pass (${adjustment.parameters === 'offset' ? 'an offset' : 'an offset and a gain'}), found for all
passes together, brings them nearer. ${summary(adjustment, used.length)}</p>
${adjustment.overlaps.length === 0 ? html`<p class="none">No two passes overlap.</p>` : overlapTable(adjustment, model)}
${cut.length > 0 ? html`<p class="note">${counted(cut.length, 'overlap was', 'overlaps were')} measured but not used; the reason stands in the last column.</p>` : null}
${adjustment.totals.length > 0 ? totalsTable(adjustment, model) : null}`;
}

function summary(adjustment: AdjustmentReport, used: number): string {
  if (used === 0) return 'No overlap could be used, so every pass stays as it was.';
  return `Over ${counted(used, 'overlap')} the root mean square difference went from ${number(adjustment.rmsBefore, 4)} to ${number(adjustment.rmsAfter, 4)}.`;
}

function overlapTable(adjustment: AdjustmentReport, model: ReportModel): Html {
  const reach = Math.max(
    model.seamLimit,
    ...adjustment.overlaps.flatMap((o) => [Math.abs(o.before), Math.abs(o.after)]),
  );
  const [, high] = niceRange(0, reach);
  const axis: StripAxis = { low: -high, high, log: false, reference: 0 };
  return scrollTable(
    html`Mean difference of the fraction, first pass minus second. Open dot: before; filled dot: after. Shaded: within the limit of ${number(model.seamLimit, 3)}.`,
    'Overlaps between passes',
    html`<thead><tr><th scope="col">First pass</th><th scope="col">Second pass</th><th scope="col" class="num">Days apart</th><th scope="col" class="num">Pixels</th><th scope="col" class="num">Before</th><th scope="col" class="num">After</th><th scope="col">${stripAxis(axis)}</th><th scope="col">Used</th></tr></thead>
<tbody>${adjustment.overlaps.map(
      (overlap) =>
        html`<tr><th scope="row" class="mono">${overlap.first}</th><td class="mono">${overlap.second}</td><td class="num">${number(overlap.daysApart)}</td><td class="num">${number(overlap.pixels)}</td><td class="num">${signed(overlap.before, 4)}</td><td class="num">${signed(overlap.after, 4)}</td><td>${strip(
          axis,
          [
            { value: overlap.before, shape: 'open', colour: '#7a5a24' },
            { value: overlap.after, shape: 'filled', colour: '#12565f' },
          ],
          [-model.seamLimit, model.seamLimit],
        )}</td><td class="long">${overlap.cut === undefined ? 'yes' : `no: ${overlap.cut}`}</td></tr>`,
    )}</tbody>`,
  );
}

function totalsTable(adjustment: AdjustmentReport, model: ReportModel): Html {
  const name = (id: string): string => {
    const row = model.zones.find(({ period }) => period === id);
    return row ? periodName(row) : id;
  };
  return html`<h3>Effect on the basin's volume</h3>${scrollTable(
    html`Volume of the covered area without the adjustment, and as published.`,
    'Effect of the adjustment on the basin volume',
    html`<thead><tr><th scope="col">Period</th><th scope="col" class="num">Without</th><th scope="col" class="num">As published</th><th scope="col" class="num">Change</th></tr></thead>
<tbody>${adjustment.totals.map(
      ({ period, before, after }) =>
        html`<tr><th scope="row">${name(period)}</th><td class="num">${volume(before)}</td><td class="num">${volume(after)}</td><td class="num">${after > before ? '+' : after < before ? '−' : ''}${percent(Math.abs(after - before) / before, 2)}</td></tr>`,
    )}</tbody>`,
  )}`;
}
