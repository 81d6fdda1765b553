import { readFileSync } from 'node:fs';
import { resolve } from 'node:path';
import { describe, expect, it } from 'vitest';
import { PAGES } from '../../../infra/docs/pages.ts';
import { basinFileSchema } from '../../../shared/contract/basin-file.ts';
import {
  allowedWords,
  basinFileJsonSchema,
  type JsonSchemaNode,
  schemaNodeAt,
} from '../../../shared/contract/basin-file-schema-json.ts';
import { ERROR_TABLE } from '../../../shared/contract/error-table.ts';
import { EXIT, EXIT_MEANING } from '../../../shared/contract/exit-codes.ts';

const schema = basinFileJsonSchema() as JsonSchemaNode & { $schema: string; additionalProperties: boolean };

describe('basinFileJsonSchema', () => {
  it('is titled, closed, and asks only for what has no default', () => {
    expect(schema).toMatchObject({
      $schema: 'https://json-schema.org/draft/2020-12/schema',
      title: 'basinloom basin file',
      type: 'object',
      required: ['region', 'period', 'scenes', 'weather'],
      additionalProperties: false,
    });
    expect(schema.description).toBeTruthy();
    expect(Object.keys(schema.properties ?? {})).toEqual(Object.keys(basinFileSchema.shape));
  });

  it('puts every kind of value into words', () => {
    const words = (...path: (string | number)[]) => allowedWords(schemaNodeAt(schema, path) ?? {});
    expect(words('grid', 'tile')).toBe('one of 128, 256, 512, 1024');
    expect(words('checks', 'minCoverage')).toBe('a number from 0 to 1');
    expect(words('grid', 'resolution')).toBe('a number above 0');
    expect(words('elevation')).toBe('a number');
    expect(words('threads')).toBe('a whole number from 1 to 256');
    expect(words('method', 'adjust', 'minPixels')).toBe('a whole number of at least 1');
    expect(words('method', 'adjust', 'use')).toBe('true or false');
    expect(words('period', 'from')).toBe('a date YYYY-MM-DD');
    expect(words('weather', 0, 'path')).toBe('text');
    expect(words('engine')).toBe('"embedded" or text like redis://host:6379');
    expect(words('method', 'use')).toBe('a list of exactly 1, each one of "metric", "sebal"');
    expect(schemaNodeAt(schema, ['grid', 'toString'])).toBeUndefined();
  });
});

describe('pages made from the contract', () => {
  const reference = resolve(import.meta.dirname, '../../../docs/reference');

  it.each(Object.keys(PAGES))('docs/reference/%s is up to date (node infra/docs/generate.ts)', (name) => {
    expect(readFileSync(resolve(reference, name), 'utf8')).toBe(PAGES[name]());
  });

  it('name every error, and every exit code that an error has', () => {
    const errors = PAGES['errors.md']();
    for (const name of Object.keys(ERROR_TABLE)) expect(errors).toContain(`\`${name}\``);
    const known: number[] = Object.values(EXIT);
    for (const { exit } of Object.values(ERROR_TABLE)) expect(known).toContain(exit);
    for (const exit of known) expect(EXIT_MEANING[exit]).toBeTruthy();
  });
});
