import type { MethodName } from '../../../../shared/contract/calibration.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { number } from '../numbers.ts';
import { scrollTable } from '../table.ts';

export const METHOD_WORDS: Readonly<Record<MethodName, { readonly title: string; readonly source: string }>> = {
  metric: {
    title: 'METRIC',
    source: 'Allen, Tasumi and Trezza 2007, Journal of Irrigation and Drainage Engineering 133: 380-394',
  },
  sebal: {
    title: 'SEBAL',
    source: 'Bastiaanssen, Menenti, Feddes and Holtslag 1998, Journal of Hydrology 212-213: 198-212',
  },
};

/** Method and parameters: enough to do the run again. */
export function methodSection(model: ReportModel): Html {
  const { title, source } = METHOD_WORDS[model.method];
  const { grid } = model;
  const own = model.parameters.filter(({ isDefault }) => !isDefault).length;
  return html`<section id="method" aria-labelledby="method-title">
<h2 id="method-title">Method and parameters</h2>
<p>${title} (${source}): latent heat is what remains of net radiation after soil heat and sensible heat. Sensible heat
comes from surface temperature through a calibration on a dry and a wet anchor, once for each overpass. Between
overpasses the fraction of reference evapotranspiration is interpolated and multiplied by each day's reference.</p>
<p>Grid: ${number(grid.rows)} rows by ${number(grid.columns)} columns of ${number(grid.resolutionM)} m in
<span class="mono">${grid.crs}</span>, worked in ${number(grid.tiles)} tiles of ${number(grid.tileSize)} pixels. The
tile size does not change a value.</p>
${
  model.parameters.length === 0
    ? null
    : scrollTable(
        html`Parameters of the run. ${own === 0 ? 'All are defaults.' : `${number(own)} set in the basin file, in bold; the others are defaults.`}`,
        'Parameters',
        html`<thead><tr><th scope="col">Key</th><th scope="col">Value</th><th scope="col">From</th></tr></thead>
<tbody>${model.parameters.map(
          ({ key, value, isDefault }) =>
            html`<tr><th scope="row" class="mono">${key}</th><td class="long">${isDefault ? value : html`<strong>${value}</strong>`}</td><td>${isDefault ? html`<span class="none">default</span>` : 'basin file'}</td></tr>`,
        )}</tbody>`,
      )
}
</section>`;
}

/** Inputs and program versions: what made these numbers. */
export function sourcesSection(model: ReportModel): Html {
  return html`<section id="sources" aria-labelledby="sources-title">
<h2 id="sources-title">Sources and versions</h2>
${
  model.sources.length === 0
    ? null
    : scrollTable(
        html`Inputs, with the fingerprint of their bytes. The way from each cell of the tables to its inputs is in <span class="mono">lineage.json</span> of the run.`,
        'Sources',
        html`<thead><tr><th scope="col">Name</th><th scope="col">Detail</th><th scope="col">Fingerprint</th></tr></thead>
${[...Map.groupBy(model.sources, ({ kind }) => kind)].map(
  ([kind, sources]) =>
    html`<tbody class="group"><tr><th colspan="3" scope="colgroup">${kind.slice(0, 1).toUpperCase()}${kind.slice(1)}, ${number(sources.length)}</th></tr>${sources.map(
      ({ name, detail, fingerprint }) =>
        html`<tr><th scope="row" class="name mono">${name}</th><td>${detail}</td><td class="long mono">${fingerprint}</td></tr>`,
    )}</tbody>`,
)}`,
      )
}
<p>Versions: ${model.versions.map(({ name, version }, i) => html`${i > 0 ? ', ' : null}${name} ${version}`)}. Run <span class="mono">${model.runId}</span>.</p>
</section>`;
}
