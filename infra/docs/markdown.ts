/** A Markdown table; bars in cells are escaped. */
export function table(head: readonly string[], rows: readonly (readonly string[])[]): string {
  const line = (cells: readonly string[]) => `| ${cells.map((cell) => cell.replaceAll('|', '\\|')).join(' | ')} |`;
  return [line(head), line(head.map(() => '---')), ...rows.map(line)].join('\n');
}

export function code(text: string): string {
  return `\`${text}\``;
}

/** A page: title, then parts with an empty line between them. */
export function page(title: string, parts: readonly string[]): string {
  const origin = '<!-- Made by `node infra/docs/generate.ts`; change the contract, not this page. -->';
  return `${[`# ${title}`, origin, ...parts].join('\n\n')}\n`;
}
