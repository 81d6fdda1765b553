import { type Html, type HtmlValue, html } from './html.ts';

/** A table that scrolls on a narrow screen, by touch or by keyboard, and never widens the page. */
export function scrollTable(caption: Html, label: string, content: HtmlValue): Html {
  return html`<div class="scroll" role="region" aria-label="${label}" tabindex="0"><table><caption><span>${caption}</span></caption>${content}</table></div>`;
}
