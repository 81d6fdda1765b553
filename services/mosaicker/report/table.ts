import { type Html, type HtmlValue, html } from './html.ts';

/** A table that scrolls on a narrow screen, by touch or by keyboard, and never widens the page. */
export function scrollTable(caption: Html, label: string, content: HtmlValue): Html {
  return html`<div class="scroll" role="region" aria-label="${label}" tabindex="0"><table><caption><span>${caption}</span></caption>${content}</table></div>`;
}

/** Items in groups by a key, in the order in which each key first appears. */
export function grouped<T>(items: readonly T[], keyOf: (item: T) => string): ReadonlyMap<string, readonly T[]> {
  const groups = new Map<string, T[]>();
  for (const item of items) {
    const group = groups.get(keyOf(item));
    if (group) group.push(item);
    else groups.set(keyOf(item), [item]);
  }
  return groups;
}
