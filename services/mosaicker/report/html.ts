/** Text that is HTML already. Only {@link html} and {@link trustedHtml} make it. */
export class Html {
  readonly text: string;

  constructor(text: string) {
    this.text = text;
  }
}

/** What may stand in a template: nothing, text (escaped), HTML, or lists of these. */
export type HtmlValue = Html | string | number | null | undefined | false | readonly HtmlValue[];

const ENTITIES: Readonly<Record<string, string>> = {
  '&': '&amp;',
  '<': '&lt;',
  '>': '&gt;',
  '"': '&quot;',
  "'": '&#39;',
  '`': '&#96;',
};

/** Text made safe between tags and inside a quoted attribute. Control characters that HTML forbids are dropped. */
export function escapeHtml(text: string): string {
  return (
    text
      .replace(/[&<>"'`]/g, (character) => ENTITIES[character])
      // biome-ignore lint/suspicious/noControlCharactersInRegex: these are the characters to remove
      .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f\ufffe\uffff]/g, '')
  );
}

/**
 * A template whose values are escaped unless they are HTML already, so that no name from a file can become
 * markup. Attributes are always written in double quotes.
 */
export function html(strings: TemplateStringsArray, ...values: readonly HtmlValue[]): Html {
  let text = strings[0];
  values.forEach((value, i) => {
    text += render(value) + strings[i + 1];
  });
  return new Html(text);
}

/** Text that the program itself wrote as HTML or CSS; never anything that came from a file. */
export function trustedHtml(text: string): Html {
  return new Html(text);
}

function render(value: HtmlValue): string {
  if (value instanceof Html) return value.text;
  if (Array.isArray(value)) return value.map(render).join('');
  if (value === null || value === undefined || value === false) return '';
  return escapeHtml(String(value));
}
