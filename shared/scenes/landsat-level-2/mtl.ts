import { readFile } from 'node:fs/promises';
import { extname } from 'node:path';
import { BasinloomError } from '../../contract/errors.ts';
import { parseMtlJson } from './mtl-json.ts';
import { type MtlRecord, MtlSyntaxError, type MtlValue } from './mtl-record.ts';
import { parseMtlText } from './mtl-text.ts';
import { parseMtlXml } from './mtl-xml.ts';

const PARSERS: Readonly<Record<string, (text: string) => MtlRecord>> = {
  '.json': parseMtlJson,
  '.txt': parseMtlText,
  '.xml': parseMtlXml,
};

/** The metadata of a scene, whichever form they came in. Every complaint names file, line where known, group and key. */
export class Mtl {
  readonly file: string;
  readonly #record: MtlRecord;

  constructor(file: string, record: MtlRecord) {
    this.file = file;
    this.#record = record;
  }

  /** The value, or undefined when the file has none. */
  find(group: string, key: string): string | undefined {
    return this.#record.get(group)?.get(key)?.text;
  }

  /** @throws BasinloomError SCENE_METADATA when the group or the key is missing */
  text(group: string, key: string): string {
    return this.#value(group, key).text;
  }

  /** @throws BasinloomError SCENE_METADATA when it is missing or no finite number */
  number(group: string, key: string): number {
    const { text } = this.#value(group, key);
    const value = text.trim() === '' ? Number.NaN : Number(text);
    if (!Number.isFinite(value)) throw this.problem(group, key, `"${text}" is not a number`);
    return value;
  }

  /** @throws BasinloomError SCENE_METADATA when it is missing, no number, or outside the range */
  numberWithin(group: string, key: string, minimum: number, maximum: number): number {
    const value = this.number(group, key);
    if (value >= minimum && value <= maximum) return value;
    throw this.problem(group, key, `${value} lies outside ${minimum}..${maximum}`);
  }

  /** A complaint about one value. */
  problem(group: string, key: string, detail: string, cause?: unknown): BasinloomError {
    const line = this.#record.get(group)?.get(key)?.line;
    const place = `${line === undefined ? '' : `line ${line}, `}${group}/${key}`;
    return new BasinloomError('SCENE_METADATA', { file: this.file, place, detail }, { cause });
  }

  #value(group: string, key: string): MtlValue {
    const found = this.#record.get(group)?.get(key);
    if (found) return found;
    throw this.problem(group, key, this.#record.has(group) ? 'the key is missing' : 'the group is missing');
  }
}

/** Reads an MTL file; the name's ending tells the form. @throws BasinloomError SCENE_METADATA */
export async function readMtl(file: string): Promise<Mtl> {
  const problem = (place: string, detail: string, cause?: unknown) =>
    new BasinloomError('SCENE_METADATA', { file, place, detail }, { cause });
  const parse = PARSERS[extname(file).toLowerCase()];
  if (!parse) throw problem('file', 'the name ends in none of .json, .txt, .xml');
  const text = await readFile(file, 'utf8').catch((cause: Error) => {
    throw problem('file', `cannot be read: ${cause.message}`, cause);
  });
  try {
    return new Mtl(file, parse(text));
  } catch (error) {
    if (error instanceof MtlSyntaxError) throw problem(error.place, error.message, error);
    throw error;
  }
}
