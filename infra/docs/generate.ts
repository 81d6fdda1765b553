import { mkdir, writeFile } from 'node:fs/promises';
import { join, resolve } from 'node:path';
import { PAGES } from './pages.ts';

/** Writes the pages under docs/reference that are made from the contract: `node infra/docs/generate.ts`. */
const folder = resolve(import.meta.dirname, '../../docs/reference');
await mkdir(folder, { recursive: true });
for (const [name, make] of Object.entries(PAGES)) await writeFile(join(folder, name), make());
