import type { ZoneRow } from '../../tables/zones.ts';
import { meter } from '../charts/meter.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { counted, day, number, percent, periodName, volume } from '../numbers.ts';
import { scrollTable } from '../table.ts';
import { cautionBox } from './caution.ts';

/** Rows of the whole basin, all land cover, one for each period. */
export function basinRows(model: ReportModel): readonly ZoneRow[] {
  return model.zones.filter((row) => row.zone_kind === 'basin' && row.land_cover === 'all');
}

/** What the run found, in words and a few large numbers, with the cautions beside it. */
export function headlineSection(model: ReportModel): Html {
  const rows = basinRows(model);
  return html`<section id="result" aria-labelledby="result-title">
<h2 id="result-title">Result</h2>
<div class="opening"><div>${rows.every(({ covered_area_km2 }) => !(covered_area_km2 > 0)) ? noResult() : result(model, rows)}${gapNotice(model)}</div>${cautionBox(model)}</div>
${rows.length > 1 ? periodTable(model, rows) : null}
</section>`;
}

function noResult(): Html {
  return html`<p class="lead">No period of this run has a value: there is no volume to report.</p>`;
}

function result(model: ReportModel, rows: readonly ZoneRow[]): Html {
  const total = rows.reduce((sum, row) => sum + (Number.isFinite(row.et_volume_m3) ? row.et_volume_m3 : 0), 0);
  return html`<p class="lead">${spanWords(model, rows)}, evapotranspiration took ${volume(total)} of water from the part of the
basin that could be mapped. ${coverageSentence(rows)}</p>
<dl class="figures">
<div><dt>Volume of the covered area</dt><dd>${volume(total)}</dd></div>
${rows.length === 1 ? html`<div><dt>Mean depth over the covered area</dt><dd>${number(rows[0].et_mean_mm)} mm</dd></div>` : html`<div><dt>Accounting periods</dt><dd>${number(rows.length)}</dd></div>`}
<div><dt>Covered share of the basin</dt><dd>${coverageRange(rows)}</dd></div>
<div><dt>Usable overpasses for each pixel${rows.length > 1 ? ' and period' : ''}</dt><dd>${observationRange(rows)}</dd></div>
</dl>`;
}

/** "In June 2025", "From 1 May 2025 to 31 August 2025" */
function spanWords(model: ReportModel, rows: readonly ZoneRow[]): string {
  if (rows.length > 1) return `From ${day(model.from)} to ${day(model.to)}`;
  const name = periodName(rows[0]);
  return /^\d/.test(name) ? `From ${name}` : `In ${name}`;
}

/** How complete the total is, in plain words. */
function coverageSentence(rows: readonly ZoneRow[]): string {
  const least = rows.reduce((a, b) => (b.valid_fraction < a.valid_fraction ? b : a));
  if (least.valid_fraction >= 1) return 'Every part of it is covered.';
  const missing = least.area_km2 - least.covered_area_km2;
  const area = `${number(missing, missing < 10 ? 1 : 0)} km²`;
  if (rows.length === 1) {
    return `The other ${percent(1 - least.valid_fraction)} (${area}) had no usable data. It is not in the total, and nothing was guessed for it.`;
  }
  return `Coverage differs by period; it is least in ${periodName(least)}, when ${percent(1 - least.valid_fraction)} of the basin (${area}) had no usable data. Such parts are not in the totals, and nothing was guessed for them.`;
}

function coverageRange(rows: readonly ZoneRow[]): string {
  const shares = rows.map((row) => row.valid_fraction);
  const low = percent(Math.min(...shares));
  const high = percent(Math.max(...shares));
  return low === high ? low : `${low} to ${high}`;
}

function observationRange(rows: readonly ZoneRow[]): string {
  const means = rows.map((row) => row.observations_mean);
  const low = number(Math.min(...means), 1);
  const high = number(Math.max(...means), 1);
  return low === high ? low : `${low} to ${high}`;
}

function gapNotice(model: ReportModel): Html | null {
  if (model.status === 'complete') return null;
  const gaps = [
    ...Map.groupBy(
      model.leftOut.filter(({ gap }) => gap),
      ({ kind }) => kind,
    ),
  ].map(([kind, members]) => counted(members.length, kind, kind === 'pass' ? 'passes' : `${kind}s`));
  const jobs = model.failures.length > 0 ? [counted(model.failures.length, 'job')] : [];
  const parts = [...gaps, ...jobs];
  return html`<div class="notice"><p><strong>This run is complete with gaps.</strong> ${parts.length > 0 ? `Set aside: ${parts.join(', ')}. ` : null}The gaps
are empty in the maps and outside the volumes. <a href="#left-out">See what was left out, and why.</a></p></div>`;
}

function periodTable(model: ReportModel, rows: readonly ZoneRow[]): Html {
  return scrollTable(
    html`Whole basin, by period. The line in each bar marks the least coverage asked for (${percent(model.minCoverage)}).`,
    'Whole basin by period',
    html`<thead><tr><th scope="col">Period</th><th scope="col" class="num">ET <small>mm</small></th><th scope="col" class="num">Volume</th><th scope="col" class="num">Covered</th><th scope="col"><span class="unit">share of basin</span></th><th scope="col" class="num">Overpasses <small>mean</small></th><th scope="col" class="num">Longest gap <small>days</small></th><th scope="col">Coverage</th></tr></thead>
<tbody>${rows.map(
      (row) =>
        html`<tr><th scope="row">${periodName(row)}</th><td class="num">${number(row.et_mean_mm, 1)}</td><td class="num">${volume(row.et_volume_m3)}</td><td class="num">${percent(row.valid_fraction)}</td><td>${meter(row.valid_fraction, coverageColour(row, model), model.minCoverage)}</td><td class="num">${number(row.observations_mean, 1)}</td><td class="num">${number(row.longest_gap_days_max)}</td><td>${coverageVerdict(row, model)}</td></tr>`,
    )}</tbody>`,
  );
}

function coverageColour(row: ZoneRow, model: ReportModel): string {
  return row.valid_fraction >= model.minCoverage ? '#2f7d86' : '#98291b';
}

export function coverageVerdict(row: ZoneRow, model: ReportModel): Html {
  return row.valid_fraction >= model.minCoverage
    ? html`<span class="pass">enough</span>`
    : html`<span class="fail">below ${percent(model.minCoverage)}</span>`;
}
