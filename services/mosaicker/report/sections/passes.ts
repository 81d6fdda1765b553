import type { AnchorRecord } from '../../../../shared/contract/calibration.ts';
import { ANCHOR_INK, scatterPlot } from '../charts/scatter.ts';
import { type Html, html } from '../html.ts';
import type { PassReport, ReportModel } from '../model.ts';
import { counted, day, number, signed } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** Anchors and calibration of every pass. */
export function passesSection(model: ReportModel): Html {
  return html`<section id="anchors" aria-labelledby="anchors-title">
<h2 id="anchors-title">Anchors and calibration of each pass</h2>
<p>All scenes of one overpass share one calibration. Its anchors are the dry and wet ends that turn surface
temperature into sensible heat. In the plots, darker cells hold more pixels.</p>
<ul class="key"><li><svg viewBox="0 0 28 18" aria-hidden="true"><path d="M14 2L21 15H7Z" fill="${ANCHOR_INK.hot}"/></svg>hot (dry) anchor</li><li><svg viewBox="0 0 28 18" aria-hidden="true"><path d="M8 3H20V15H8Z" fill="${ANCHOR_INK.cold}"/></svg>cold (wet) anchor</li></ul>
${model.passes.length === 0 ? html`<p class="none">No pass was used.</p>` : null}
<div class="cards">${model.passes.map(passCard)}</div>
</section>`;
}

function passCard(pass: PassReport): Html {
  return html`<article class="card"><h3>${pass.satellite}, ${day(pass.date)}</h3>
<p class="mono">${pass.passId}</p>
<dl><dt>Centre time</dt><dd>${pass.acquired}</dd>
<dt>Scenes</dt><dd>${pass.scenes.map((scene) => html`<span class="mono">${scene}</span> `)}</dd>
<dt>Candidates</dt><dd>${number(pass.coldCandidates)} cold, ${number(pass.hotCandidates)} hot</dd>
<dt>Calibration</dt><dd>${calibration(pass)}</dd>
<dt>Adjustment</dt><dd>${adjustment(pass)}</dd></dl>
${pass.scatter ? scatterPlot(pass.scatter, pass.anchors, `Pixels of pass ${pass.passId} over NDVI and datum temperature, with ${counted(pass.anchors.length, 'anchor')}`) : null}
${pass.anchors.length > 0 ? anchorTable(pass.anchors) : html`<p class="none">No anchor of its own.</p>`}
</article>`;
}

function calibration(pass: PassReport): Html {
  if (pass.setAside) return html`<span class="fail">set aside</span>: ${pass.setAside}`;
  const borrowed = pass.borrowedFrom ? html`<strong>borrowed</strong> from ${pass.borrowedFrom}; ` : null;
  return html`${borrowed}dT = ${number(pass.slope, 4)} × (T − ${number(pass.zeroTemperature, 2)} K)`;
}

function adjustment({ adjustment: found }: PassReport): Html {
  if (!found) return html`none`;
  if (found.links === 0) return html`no overlap: left as it was`;
  const gain = found.gain === 1 ? null : html`gain ${number(found.gain, 4)}, `;
  return html`${gain}offset ${signed(found.offset, 4)}, from ${counted(found.links, 'overlap')}`;
}

interface Quantity {
  readonly name: string;
  readonly unit?: string;
  readonly text: (anchor: AnchorRecord) => string;
}

const QUANTITIES: readonly Quantity[] = [
  { name: 'Longitude', unit: '°', text: (a) => number(a.longitudeDeg, 4) },
  { name: 'Latitude', unit: '°', text: (a) => number(a.latitudeDeg, 4) },
  { name: 'Grid pixel', unit: 'row, column', text: (a) => `${a.row}, ${a.column}` },
  { name: 'Elevation', unit: 'm', text: (a) => number(a.elevationM) },
  { name: 'NDVI', text: (a) => number(a.ndvi, 3) },
  { name: 'Albedo', text: (a) => number(a.albedo, 3) },
  { name: 'Surface temperature', unit: 'K', text: (a) => number(a.lst, 2) },
  { name: 'Datum temperature', unit: 'K', text: (a) => number(a.datumTemperature, 2) },
  { name: 'Net radiation', unit: 'W m⁻²', text: (a) => number(a.netRadiation, 1) },
  { name: 'Soil heat', unit: 'W m⁻²', text: (a) => number(a.soilHeat, 1) },
  { name: 'Sensible heat', unit: 'W m⁻²', text: (a) => number(a.sensibleHeat, 1) },
  { name: 'Latent heat', unit: 'W m⁻²', text: (a) => number(a.latentHeat, 1) },
  { name: 'dT', unit: 'K', text: (a) => number(a.temperatureDifference, 2) },
  { name: 'Aerodynamic resistance', unit: 's m⁻¹', text: (a) => number(a.aerodynamicResistance, 1) },
];

function anchorTable(anchors: readonly AnchorRecord[]): Html {
  return html`${scrollTable(
    html`Values at the anchor pixels.`,
    'Anchors',
    html`<thead><tr><td></td>${anchors.map(({ role }) => html`<th scope="col" class="num">${role === 'hot' ? 'Hot' : 'Cold'}</th>`)}</tr></thead>
<tbody>${QUANTITIES.map(
      ({ name, unit, text }) =>
        html`<tr><th scope="row">${name}${unit ? html` <span class="unit">${unit}</span>` : null}</th>${anchors.map((anchor) => html`<td class="num">${text(anchor)}</td>`)}</tr>`,
    )}</tbody>`,
  )}<ul>${anchors.map(({ role, reason }) => html`<li>${role === 'hot' ? 'Hot' : 'Cold'}: ${reason}</li>`)}</ul>`;
}
