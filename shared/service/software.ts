import { readFileSync } from 'node:fs';

const { name, version } = JSON.parse(readFileSync(new URL('../../package.json', import.meta.url), 'utf8')) as {
  name: string;
  version: string;
};

/** Name and version as they go into products and records. */
export const SOFTWARE = { name, version };
