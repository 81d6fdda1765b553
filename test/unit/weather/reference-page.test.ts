import { readFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { DAILY_COLUMNS, HOURLY_COLUMNS, LIST_COLUMNS } from '../../../shared/weather/columns.ts';

const page = readFileSync(new URL('../../../docs/reference/weather.md', import.meta.url), 'utf8');
const section = (title: string) => page.split('\n## ').find((part) => part.startsWith(title)) ?? '';

test.each([
  ['Station list', LIST_COLUMNS],
  ['Hourly record', HOURLY_COLUMNS],
  ['Daily record', DAILY_COLUMNS],
] as const)('the page lists the columns and ranges of: %s', (title, columns) => {
  for (const { name, low, high } of Object.values(columns)) {
    const row = section(title)
      .split('\n')
      .find((line) => line.startsWith(`| \`${name}\` |`));
    expect(row, name).toBeDefined();
    expect(row, name).toContain(`| ${low} to ${high} |`);
  }
});
