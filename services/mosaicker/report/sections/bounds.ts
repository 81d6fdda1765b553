import { PRODUCTS, type ProductEntry, type ProductName } from '../../../../shared/contract/products.ts';
import type { BoundsRow } from '../../bounds-check.ts';
import { niceRange } from '../../scale.ts';
import { strip } from '../charts/strip.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { number, percent, significant, tickText, unitText } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** Checks against physics: plausible ranges, usual order of the fluxes, sums that must close. */
export function boundsSection(model: ReportModel): Html {
  return html`<section id="checks" aria-labelledby="checks-title">
<h2 id="checks-title">Checks against physics</h2>
${model.bounds.length > 0 ? boundsTable(model.bounds) : html`<p class="none">No product of this run has a plausible range.</p>`}
${model.closures.length > 0 ? closureTable(model) : null}
${orderNote(model)}
</section>`;
}

interface ProductBounds {
  readonly product: ProductName;
  readonly maps: number;
  readonly minimum: number;
  readonly maximum: number;
  readonly mean: number;
  readonly count: number;
  readonly outside: number;
  readonly worst: BoundsRow;
}

/** All dates of one product together; the mean is weighted by pixels. */
function together(product: ProductName, rows: readonly BoundsRow[]): ProductBounds {
  const valid = rows.filter(({ count }) => count > 0);
  const count = valid.reduce((sum, row) => sum + row.count, 0);
  return {
    product,
    maps: rows.length,
    count,
    outside: valid.reduce((sum, row) => sum + row.outside, 0),
    mean: valid.reduce((sum, row) => sum + row.mean * row.count, 0) / count,
    minimum: Math.min(...valid.map(({ minimum }) => minimum)),
    maximum: Math.max(...valid.map(({ maximum }) => maximum)),
    worst: rows.reduce((a, b) => (b.outsideShare > a.outsideShare ? b : a)),
  };
}

function boundsTable(bounds: readonly BoundsRow[]): Html {
  const products = [...Map.groupBy(bounds, ({ product }) => product)].map(([product, rows]) => together(product, rows));
  return html`<p>Each product is held against its plausible range. Values outside it are kept and counted, not cut: a
large share points to a wrong calibration or input.</p>${scrollTable(
    html`Line: lowest to highest value found; dot: mean; shaded: plausible range. Each line has its own scale.`,
    'Plausible ranges',
    html`<thead><tr><th scope="col">Product</th><th scope="col" class="num">Maps</th><th scope="col" class="num">Lowest</th><th scope="col" class="num">Mean</th><th scope="col" class="num">Highest</th><th scope="col" class="num">Plausible</th><th scope="col"><span class="unit">found in range</span></th><th scope="col" class="num">Outside</th><th scope="col">Most on</th></tr></thead>
<tbody>${products.map(boundsLine)}</tbody>`,
  )}`;
}

function boundsLine(found: ProductBounds): Html {
  const entry: ProductEntry = PRODUCTS[found.product];
  const [low, high] = entry.bounds as readonly [number, number];
  const unit = entry.unit === '1' ? null : html` <span class="unit">${unitText(entry.unit)}</span>`;
  const range = niceRange(Math.min(low, found.minimum), Math.max(high, found.maximum));
  const picture =
    found.count === 0
      ? null
      : strip(
          { low: range[0], high: range[1], log: false },
          [{ value: found.mean, low: found.minimum, high: found.maximum, shape: 'filled', colour: '#12565f' }],
          [low, high],
        );
  return html`<tr><th scope="row" class="name">${entry.title}${unit}</th><td class="num">${number(found.maps)}</td><td class="num">${significant(found.minimum)}</td><td class="num">${significant(found.mean)}</td><td class="num">${significant(found.maximum)}</td><td class="num">${tickText(low)} to ${tickText(high)}</td><td>${picture}</td><td class="num">${found.outside === 0 ? html`<span class="pass">none</span>` : html`<strong>${percent(found.outside / found.count, 2)}</strong>`}</td><td class="when">${found.outside === 0 ? null : found.worst.when}</td></tr>`;
}

function closureTable(model: ReportModel): Html {
  return html`<h3>Sums that must close</h3>${scrollTable(
    html`Largest deviation found, against its limit.`,
    'Closure',
    html`<thead><tr><th scope="col">Check</th><th scope="col">What is compared</th><th scope="col" class="num">Found</th><th scope="col" class="num">Limit</th><th scope="col">Verdict</th></tr></thead>
<tbody>${model.closures.map(
      (check) =>
        html`<tr><th scope="row" class="name">${check.name}</th><td class="long">${check.meaning}</td><td class="num">${scientific(check.found)} ${check.unit}</td><td class="num">${scientific(check.limit)} ${check.unit}</td><td>${check.within ? html`<span class="pass">closes</span>` : html`<span class="fail">does not close</span>`}</td></tr>`,
    )}</tbody>`,
  )}`;
}

/** A number; a small one as a power of ten. */
function scientific(value: number): Html {
  if (value === 0 || Math.abs(value) >= 0.001 || !Number.isFinite(value)) return html`${significant(value)}`;
  const [digits, power] = value.toExponential(1).split('e');
  return html`${number(Number(digits), 1)} × 10<sup>${number(Number(power))}</sup>`;
}

function orderNote(model: ReportModel): Html | null {
  const unusual = model.fluxOrders.filter(({ usual }) => !usual);
  if (model.fluxOrders.length === 0) return null;
  if (unusual.length === 0) {
    return html`<p class="note">On all dates net radiation is the largest flux and soil heat has the narrowest range, as is usual at a clear midday.</p>`;
  }
  return html`<p class="note">Usually net radiation is the largest flux and soil heat has the narrowest range. It was otherwise on ${unusual
    .map(({ when, largest, narrowest }) => `${when} (largest ${largest}, narrowest ${narrowest})`)
    .join(', ')}. That is no error in itself, but a reason to look.</p>`;
}
