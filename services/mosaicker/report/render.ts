import { PALETTES, paletteHex } from '../palettes.ts';
import { type Html, html, trustedHtml } from './html.ts';
import type { ReportModel } from './model.ts';
import { day } from './numbers.ts';
import { adjustmentSection } from './sections/adjustment.ts';
import { boundsSection } from './sections/bounds.ts';
import { headlineSection } from './sections/headline.ts';
import { leftOutSection } from './sections/left-out.ts';
import { dayMapsSection, periodMapsSection } from './sections/maps.ts';
import { METHOD_WORDS, methodSection, sourcesSection } from './sections/method.ts';
import { passesSection } from './sections/passes.ts';
import { qualitySection } from './sections/quality.ts';
import { seamsSection } from './sections/seams.ts';
import { zonesSection } from './sections/zones.ts';
import { REPORT_CSS } from './style.ts';

export type { ReportModel } from './model.ts';

const CONTENTS: readonly (readonly [id: string, title: string])[] = [
  ['result', 'Result'],
  ['period-maps', 'Period maps'],
  ['volumes', 'Volumes by zone'],
  ['day-maps', 'Overpass dates'],
  ['quality', 'Data quality'],
  ['anchors', 'Anchors'],
  ['adjustment', 'Adjustment'],
  ['seams', 'Seams'],
  ['checks', 'Physics'],
  ['left-out', 'Left out'],
  ['method', 'Method'],
  ['sources', 'Sources'],
];

/**
 * The report of a run as one HTML page: style and pictures inside, no script, no other host, so that it can be
 * mailed, archived and printed. The same model gives the same text; every name from a file is escaped.
 */
export function renderReport(model: ReportModel): string {
  return `<!doctype html>\n${page(model).text}\n`;
}

function page(model: ReportModel): Html {
  return html`<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="default-src 'none'; img-src data:; style-src 'unsafe-inline'">
<title>${model.basin}: evapotranspiration ${model.from} to ${model.to}</title>
<style>${trustedHtml(REPORT_CSS)}</style>
</head>
<body>
${band()}
<div class="page">
<header class="masthead">
<p class="kicker">Evapotranspiration account</p>
<h1>${model.basin}</h1>
<ul class="facts"><li>${day(model.from)} to ${day(model.to)}</li><li>${METHOD_WORDS[model.method].title} on a ${model.grid.resolutionM} m grid</li><li>${model.status === 'complete' ? html`<span class="pass">Complete</span>` : html`<span class="fail">Complete with gaps</span>`}</li></ul>
<nav class="contents" aria-label="Contents"><ol>${CONTENTS.map(([id, title]) => html`<li><a href="#${id}">${title}</a></li>`)}</ol></nav>
</header>
<main>
${headlineSection(model)}
${periodMapsSection(model)}
${zonesSection(model)}
${dayMapsSection(model)}
${qualitySection(model)}
${passesSection(model)}
${adjustmentSection(model)}
${seamsSection(model)}
${boundsSection(model)}
${leftOutSection(model)}
${methodSection(model)}
${sourcesSection(model)}
</main>
<footer><p>Made by basinloom from the sources listed above. Evapotranspiration maps inform; they do not decide.</p></footer>
</div>
</body>
</html>`;
}

/** The colours of the evaporation maps, dry to wet, as a line across the top. */
function band(): Html {
  const stops = Array.from({ length: 12 }, (_, i) => paletteHex(PALETTES.evaporation, i / 11));
  return html`<div class="band" style="background:linear-gradient(90deg,${stops.join(',')})"></div>`;
}
