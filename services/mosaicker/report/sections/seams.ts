import { niceRange } from '../../scale.ts';
import type { SeamKind, SeamRow } from '../../tables/seams.ts';
import { type StripAxis, strip, stripAxis } from '../charts/strip.ts';
import { type Html, html } from '../html.ts';
import type { ReportModel } from '../model.ts';
import { counted, MISSING, number, signed } from '../numbers.ts';
import { scrollTable } from '../table.ts';

/** The measurements of one seam before and after adjustment. */
export interface SeamPair {
  readonly before?: SeamRow;
  readonly after?: SeamRow;
  /** The published state: after, or before where nothing was adjusted. */
  readonly last: SeamRow;
}

const KINDS: Readonly<Record<SeamKind, { readonly title: string; readonly words: string }>> = {
  'tile-edge': {
    title: 'Edges of tiles',
    words: 'Lines where the work was cut into blocks. A ratio of 1 means that the line cannot be found in the map.',
  },
  'scene-edge': {
    title: 'Edges of scenes within a pass',
    words: 'The scenes of one overpass share one calibration, so the ratio should be 1.',
  },
  'pass-edge': { title: 'Edges of passes', words: 'Lines where the day map changes from one pass to another.' },
  'pass-overlap': {
    title: 'Overlaps of passes',
    words:
      'Pixels that two passes on different days both saw; the difference also holds what truly changed between them.',
  },
};

/** Most rows shown of a kind; those beyond their limit come first. */
const SHOWN = 12;

/** Seams, measured: before and after adjustment, against the limit. */
export function seamsSection(model: ReportModel): Html {
  const pairs = seamPairs(model.seams);
  const beyond = pairs.filter(({ last }) => last.within_limit === false);
  return html`<section id="seams" aria-labelledby="seams-title">
<h2 id="seams-title">Seams</h2>
<p>A seam is a line where the origin of a value changes. For each one the mean jump across it is set against the mean
jump between neighbouring pixels on both sides. ${verdict(pairs, beyond)}</p>
${pairs.length > 0 ? seamTable(model, pairs) : null}
<p class="note">Every seam, with its counts and 95 % confidence intervals, is in <span class="mono">tables/seams.csv</span>.</p>
</section>`;
}

function verdict(pairs: readonly SeamPair[], beyond: readonly SeamPair[]): Html {
  if (pairs.length === 0) return html`This run has no seam to measure.`;
  if (beyond.length === 0) return html`<span class="pass">${seamsWithin(pairs)}</span>`;
  return html`<span class="fail">${counted(beyond.length, 'seam is', 'seams are')} beyond the limit</span> of ${number(pairs.length)} measured.`;
}

function seamsWithin(pairs: readonly SeamPair[]): string {
  return pairs.length === 1
    ? 'The one seam is within its limit.'
    : `All ${number(pairs.length)} seams are within their limits.`;
}

/** Rows of the same seam, before and after, joined. */
export function seamPairs(rows: readonly SeamRow[]): readonly SeamPair[] {
  return [...Map.groupBy(rows, (row) => JSON.stringify([row.kind, row.variable, row.when, row.seam])).values()].map(
    (group) => {
      const before = group.find(({ stage }) => stage === 'before');
      const after = group.find(({ stage }) => stage === 'after');
      return { ...(before ? { before } : {}), ...(after ? { after } : {}), last: after ?? group[group.length - 1] };
    },
  );
}

function seamTable(model: ReportModel, pairs: readonly SeamPair[]): Html {
  const axis = ratioAxis(pairs);
  const kinds = Map.groupBy(pairs, ({ last }) => last.kind);
  return scrollTable(
    html`Dots: jump across the seam over jump beside it, with its 95 % interval; logarithmic. Open: before adjustment. The broken line marks 1: no seam. Seam limit of the basin file: ${number(model.seamLimit, 3)}.`,
    'Seams',
    html`<thead><tr><th scope="col">Seam</th><th scope="col">When</th><th scope="col" class="num">Pairs</th><th scope="col" class="num">Jump <small>across, beside</small></th><th scope="col" class="num">Ratio</th><th scope="col">${stripAxis(axis)}</th><th scope="col" class="num">Difference <small>before, after</small></th><th scope="col" class="num">Limit</th><th scope="col">Verdict</th></tr></thead>
${[...kinds].map(([kind, members]) => kindBody(kind, members, axis))}`,
  );
}

function kindBody(kind: SeamKind, members: readonly SeamPair[], axis: StripAxis): Html {
  const shown = worstFirst(members).slice(0, SHOWN);
  const rest = members.length - shown.length;
  return html`<tbody class="group"><tr><th colspan="9" scope="colgroup"><span>${KINDS[kind].title}, ${number(members.length)}<small>${KINDS[kind].words}${rest > 0 ? ` The ${number(shown.length)} most notable of ${number(members.length)} are shown.` : null}</small></span></th></tr>
${shown.map((pair) => seamLine(pair, axis))}</tbody>`;
}

function seamLine({ before, after, last }: SeamPair, axis: StripAxis): Html {
  const marks = [
    before && after ? mark(before, 'open', '#7a5a24') : null,
    mark(last, 'filled', last.within_limit === false ? '#98291b' : '#12565f'),
  ].filter((one) => one !== null);
  return html`<tr><th scope="row" class="name">${last.seam} <span class="unit">${last.variable}</span></th><td class="when">${last.when}</td><td class="num">${number(last.count)}</td><td class="num">${number(last.mean_jump, 4)}, ${number(last.mean_neighbour_jump, 4)}</td><td class="num">${number(last.ratio, 2)}</td><td>${Number.isFinite(last.ratio) ? strip(axis, marks) : null}</td><td class="num">${before && after ? `${signed(before.mean_difference, 4)}, ` : null}${signed(last.mean_difference, 4)}</td><td class="num">${last.limit === undefined ? MISSING : number(last.limit, 3)}</td><td>${seamVerdict(last)}</td></tr>`;
}

function mark(row: SeamRow, shape: 'open' | 'filled', colour: string) {
  return { value: row.ratio, low: row.ratio_ci_low, high: row.ratio_ci_high, shape, colour };
}

function seamVerdict(row: SeamRow): Html {
  if (row.within_limit === undefined) return html`<span class="none">no limit</span>`;
  return row.within_limit ? html`<span class="pass">within</span>` : html`<span class="fail">beyond</span>`;
}

/** Beyond the limit first; then by how far the ratio or the difference stands out. */
function worstFirst(pairs: readonly SeamPair[]): readonly SeamPair[] {
  const score = ({ last }: SeamPair): number =>
    (last.within_limit === false ? 1000 : 0) +
    (last.limit ? Math.abs(last.mean_difference) / last.limit : 0) +
    (last.ratio > 0 ? Math.abs(Math.log(last.ratio)) : 0);
  return pairs.toSorted((a, b) => score(b) - score(a));
}

function ratioAxis(pairs: readonly SeamPair[]): StripAxis {
  const ratios = pairs
    .flatMap(({ before, last }) => [before?.ratio, last.ratio, last.ratio_ci_low, last.ratio_ci_high])
    .filter((ratio): ratio is number => ratio !== undefined && Number.isFinite(ratio) && ratio > 0);
  // Whole powers of ten leave too much room: round the ends to halves of a decade.
  const [low, high] = niceRange(
    Math.log10(Math.max(0.1, Math.min(0.7, ...ratios))),
    Math.log10(Math.min(100, Math.max(1.6, ...ratios))),
  );
  return { low: 10 ** low, high: 10 ** high, log: true, reference: 1 };
}
