import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { number } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** Scenes, passes and jobs without which the result was made, and what would bring them back. */
export function leftOutSection(model: ReportModel): Html {
  const nothing = model.leftOut.length === 0 && model.failures.length === 0;
  return html`<section id="left-out" aria-labelledby="left-out-title">
<h2 id="left-out-title">What was left out</h2>
${nothing ? html`<p>Nothing was left out: every scene, pass and tile was used.</p>` : html`<p>One bad input never stops a basin. What follows was set aside. Where it leaves a gap, the maps are empty and the volumes do not count it.</p>`}
${model.leftOut.length > 0 ? leftOutTable(model) : null}
${model.failures.length > 0 ? failureTable(model) : null}
</section>`;
}

function leftOutTable(model: ReportModel): Html {
  return scrollTable(
    html`Inputs and results without which the run went on.`,
    'Left out',
    html`<thead><tr><th scope="col">What</th><th scope="col">Effect</th><th scope="col">Why</th><th scope="col">What to do</th><th scope="col">Code</th></tr></thead>
<tbody>${model.leftOut.map(
      ({ kind, id, gap, error }) =>
        html`<tr><th scope="row" class="name">${kind} <span class="mono">${id}</span></th><td>${gap ? html`<strong>leaves a gap</strong>` : 'no gap'}</td><td class="long">${error.message}</td><td class="long">${error.remedy}</td><td class="mono code">${error.code}</td></tr>`,
    )}</tbody>`,
  );
}

function failureTable(model: ReportModel): Html {
  return scrollTable(
    html`Jobs that were tried and set aside.`,
    'Jobs set aside',
    html`<thead><tr><th scope="col">Job</th><th scope="col">Why</th><th scope="col">What to do</th><th scope="col" class="num">Tries</th><th scope="col">Code</th></tr></thead>
<tbody>${model.failures.map(
      (failure) =>
        html`<tr><th scope="row" class="name">${failure.stage} <span class="mono">${failure.job}</span></th><td class="long">${failure.message}</td><td class="long">${failure.remedy}</td><td class="num">${number(failure.attempts)}</td><td class="mono code">${failure.code}</td></tr>`,
    )}</tbody>`,
  );
}
