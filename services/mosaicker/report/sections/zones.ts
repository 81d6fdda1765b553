import type { ZoneRow } from '../../tables/zones.ts';
import { meter } from '../charts/meter.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { MISSING, number, percent, periodName, volume } from '../numbers.ts';
import { scrollTable } from '../table.ts';
import { cautionNote } from './caution.ts';
import { coverageVerdict } from './headline.ts';

/** More periods than this: an overview by period comes first, the full tables fold. */
const OPEN_PERIODS = 2;

/** Volumes by sub-basin and by land cover. */
export function zonesSection(model: ReportModel): Html {
  const all = model.zones.filter((row) => row.land_cover === 'all');
  const periods = [...Map.groupBy(all, ({ period }) => period).values()];
  const basin = model.zones.filter((row) => row.zone_kind === 'basin');
  return html`<section id="volumes" aria-labelledby="volumes-title">
<h2 id="volumes-title">Volumes by zone</h2>
<div class="opening"><p>A volume is the mean depth over the pixels with a value times the area of those pixels;
pixels on a border count by the part that lies in the zone. Nothing is added for areas without data: read each volume with its coverage. The
full list, zone by zone and class by class, is in <span class="mono">tables/zones.csv</span>.</p>${cautionNote(model)}</div>
${all.length === 0 ? html`<p class="none">No zone has a value.</p>` : null}
${periods.length > OPEN_PERIODS ? overview(all) : null}
${periods.map((rows, i) => {
  const table = periodTable(model, rows);
  if (periods.length <= OPEN_PERIODS) return table;
  return html`<details${i === 0 ? html` open` : null}><summary>${periodName(rows[0])} in full</summary>${table}</details>`;
})}
${landCoverTable(basin)}
</section>`;
}

function periodTable(model: ReportModel, rows: readonly ZoneRow[]): Html {
  const zones = rows.filter((row) => row.zone_kind === 'sub-basin');
  const basin = rows.filter((row) => row.zone_kind === 'basin');
  const largest = Math.max(...(zones.length > 0 ? zones : basin).map((row) => row.et_volume_m3 || 0));
  const line = (row: ZoneRow): Html =>
    html`<th scope="row" class="name">${row.zone}</th><td class="num">${number(row.area_km2, 1)}</td><td class="num">${percent(row.valid_fraction)}</td><td class="num">${number(row.et_mean_mm, 1)}</td><td class="num">${referenceShare(row)}</td><td class="num">${volume(row.et_volume_m3)}</td><td>${row.zone_kind === 'sub-basin' ? meter(row.et_volume_m3 / largest, '#2f7d86') : null}</td><td class="num">${number(row.observations_mean, 1)}</td><td class="num">${number(row.longest_gap_days_max)}</td><td>${coverageVerdict(row, model)}</td>`;
  return scrollTable(
    html`${periodName(rows[0])}. Depth is the mean over the covered area; volume is of the covered area only.`,
    `Zones in ${periodName(rows[0])}`,
    html`<thead><tr><th scope="col">Zone</th><th scope="col" class="num">Area <small>km²</small></th><th scope="col" class="num">Covered</th><th scope="col" class="num">ET <small>mm</small></th><th scope="col" class="num">ET over reference</th><th scope="col" class="num">Volume</th><th scope="col"><span class="unit">against the largest</span></th><th scope="col" class="num">Overpasses <small>mean</small></th><th scope="col" class="num">Longest gap <small>days</small></th><th scope="col">Coverage</th></tr></thead>
<tbody>${zones.map((row) => html`<tr>${line(row)}</tr>`)}${basin.map((row) => html`<tr class="total">${line(row)}</tr>`)}</tbody>`,
  );
}

function referenceShare(row: ZoneRow): string {
  return row.reference_et_mm ? number(row.et_mean_mm / row.reference_et_mm, 2) : MISSING;
}

/** Zones down, periods across: volumes, with the depth below each. */
function overview(rows: readonly ZoneRow[]): Html {
  const subBasins = rows.filter(({ zone_kind }) => zone_kind === 'sub-basin');
  const basin = rows.filter(({ zone_kind }) => zone_kind === 'basin');
  return matrix(
    [...subBasins, ...basin],
    ({ zone_kind, zone }) => `${zone_kind} ${zone}`,
    'Zone',
    'Volume by zone and period, million m³; below it the depth and the covered share.',
  );
}

function landCoverTable(basin: readonly ZoneRow[]): Html | null {
  const classes = basin.filter((row) => row.land_cover !== 'all');
  if (classes.length === 0) return null;
  return html`<h3>By land cover, whole basin</h3>${matrix(classes, ({ land_cover }) => land_cover, 'Land cover', 'Volume by land-cover class and period, million m³; below it the depth and the covered share.')}`;
}

function matrix(rows: readonly ZoneRow[], keyOf: (row: ZoneRow) => string, head: string, caption: string): Html {
  const periods = [...Map.groupBy(rows, ({ period }) => period).values()].map(([first]) => first);
  return scrollTable(
    html`${caption}`,
    caption,
    html`<thead><tr><th scope="col">${head}</th>${periods.map((row) => html`<th scope="col" class="num">${periodName(row)}</th>`)}</tr></thead>
<tbody>${[...Map.groupBy(rows, keyOf)].map(
      ([, line]) =>
        html`<tr${line[0].zone_kind === 'basin' && line[0].land_cover === 'all' ? html` class="total"` : null}><th scope="row" class="name">${line[0].land_cover === 'all' ? line[0].zone : line[0].land_cover}</th>${periods.map(({ period }) => matrixCell(line.find((row) => row.period === period)))}</tr>`,
    )}</tbody>`,
  );
}

function matrixCell(row: ZoneRow | undefined): Html {
  if (!row || !Number.isFinite(row.et_mean_mm)) return html`<td class="num">${MISSING}</td>`;
  return html`<td class="num">${number(row.et_volume_m3 / 1e6, 2)}<br><span class="unit">${number(row.et_mean_mm, 1)} mm, ${percent(row.valid_fraction)}</span></td>`;
}
