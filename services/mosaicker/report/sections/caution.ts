import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';

/** The cautions, near the top of the page. */
export function cautionBox(model: ReportModel): Html {
  return html`<aside class="caution" aria-labelledby="caution-title">
<h2 id="caution-title">Before you act on these numbers</h2>
<p>Evapotranspiration maps and stress classes inform; they do not decide. Allocation, curtailment, drought
declaration and the enforcement of water rights follow local rules and the judgement of licensed professionals,
with checks in the field.</p>
<p>${uncertaintyText(model)}</p>
</aside>`;
}

/** The same in short, beside the volumes. */
export function cautionNote(model: ReportModel): Html {
  return html`<aside class="caution small" aria-label="Caution"><p>These volumes inform; they do not decide. Allocation,
curtailment, drought declaration and water-rights enforcement follow local rules and licensed professionals, with
field checks. ${uncertaintyText(model)}</p></aside>`;
}

function uncertaintyText(model: ReportModel): string {
  return (
    model.uncertainty ??
    'No uncertainty was estimated for the volumes of this run: do not read a small difference between zones or periods as a real one.'
  );
}
