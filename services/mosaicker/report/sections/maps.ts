import { PRODUCTS, type ProductEntry } from '../../../../shared/contract/products.ts';
import { mapDrawing, mapLegend } from '../charts/map.ts';
import { type Html, html } from '../html.ts';
import type { MapFigure, ReportModel } from '../model.ts';
import { day, number, percent, periodName, unitText } from '../numbers.ts';

/** Maps of the accounting periods: one legend for each run of maps that share a scale. */
export function periodMapsSection(model: ReportModel): Html {
  return html`<section id="period-maps" aria-labelledby="period-maps-title">
<h2 id="period-maps-title">Maps of the periods</h2>
<p>Thick line: the basin. Thin lines: its zones. Hatched: no usable data, so no value. North is up. Maps under one
legend share its scale.</p>
${model.periodMaps.length === 0 ? html`<p class="none">No period map was made.</p>` : null}
${[...Map.groupBy(model.periodMaps, scaleKey).values()].map((maps) => {
  const entry: ProductEntry = PRODUCTS[maps[0].product];
  return html`<h3>${entry.title}</h3><p class="note">${entry.description}.</p>${mapLegend(maps[0])}
<div class="${maps.length <= 2 ? 'maps few' : 'maps'}">${maps.map((map) => mapFigure(map, periodTitle(model, map), 'large'))}</div>`;
})}
</section>`;
}

/** Small maps of the overpass dates: one legend for each run of maps that share a scale. */
export function dayMapsSection(model: ReportModel): Html {
  return html`<section id="day-maps" aria-labelledby="day-maps-title">
<h2 id="day-maps-title">Maps of the overpass dates</h2>
<p>What the satellites saw on each date, after adjustment between passes. Maps under one
legend share its scale.</p>
${model.dayMaps.length === 0 ? html`<p class="none">No day map was made.</p>` : null}
${[...Map.groupBy(model.dayMaps, scaleKey).values()].map((maps) => {
  const entry: ProductEntry = PRODUCTS[maps[0].product];
  return html`<h3>${entry.title}</h3>${mapLegend(maps[0])}
<div class="maps small">${maps.map((map) => mapFigure(map, day(map.when), 'small'))}</div>`;
})}
</section>`;
}

function scaleKey(map: MapFigure): string {
  return `${map.product} ${map.style.range.join(' ')}`;
}

function periodTitle(model: ReportModel, map: MapFigure): string {
  const row = model.zones.find(({ period }) => period === map.when);
  return row ? periodName(row) : map.when;
}

function mapFigure(map: MapFigure, title: string, size: 'large' | 'small'): Html {
  const entry: ProductEntry = PRODUCTS[map.product];
  const unit = entry.unit === '1' ? '' : ` ${unitText(entry.unit)}`;
  const decimals = entry.unit === '1' ? 2 : 1;
  const found = `mean ${number(map.mean, decimals)}${unit}, ${percent(map.validFraction)} of the basin covered`;
  return html`<figure><div class="frame">${mapDrawing(map, `Map: ${entry.title}, ${title}; ${found}.`, size)}</div>
<figcaption><strong>${title}</strong>${capital(found)}.${map.passes?.length ? html` <span class="unit">${map.passes.join(', ')}</span>` : null}</figcaption></figure>`;
}

function capital(text: string): string {
  return text.slice(0, 1).toUpperCase() + text.slice(1);
}
