import { type Html, html } from '../html.ts';

/** A share 0..1 as a small bar; `words` says it to a reader who does not see it (empty: the number stands beside). */
export function meter(share: number, colour: string, limit?: number): Html {
  const width = Number.isFinite(share) ? Math.min(1, Math.max(0, share)) * 120 : 0;
  return html`<svg class="meter" viewBox="0 0 120 12" preserveAspectRatio="none" aria-hidden="true"><rect width="120" height="12" fill="#e9e5da"/><rect width="${width.toFixed(1)}" height="12" fill="${colour}"/>${
    limit === undefined
      ? null
      : html`<path d="M${(limit * 120).toFixed(1)} 0V12" stroke="#1f2a2c" stroke-width="1.5" vector-effect="non-scaling-stroke"/>`
  }</svg>`;
}
