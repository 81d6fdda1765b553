import { closest } from 'fastest-levenshtein';
import { type Document, isCollection, isMap, isScalar, LineCounter, parseDocument } from 'yaml';
import type { z } from 'zod';
import { type BasinFile, basinFileSchema } from './basin-file.ts';
import {
  allowedWords,
  basinFileJsonSchema,
  type JsonSchemaNode,
  literalsOf,
  schemaNodeAt,
  suggestKey,
} from './basin-file-schema-json.ts';
import { BasinloomError } from './errors.ts';
import { isRecord } from './is-record.ts';

type KeyPath = readonly (string | number)[];

/**
 * Reads and validates a basin file. Dates stay text (YAML core schema); paths stay as written.
 *
 * @param text YAML
 * @param file name for messages
 * @param overrides values by dotted key path (`grid.tile`, `scenes.0.path`), each read as YAML; they win over the text
 * @throws BasinloomError the first problem in the file: BASIN_FILE_SYNTAX, BASIN_FILE_KEY or BASIN_FILE_VALUE; the
 *   others are in its cause, an AggregateError
 */
export function parseBasinFile(
  text: string,
  file: string,
  overrides: Readonly<Record<string, string>> = {},
): BasinFile {
  const outcome = validate(text, file, overrides);
  if (outcome.basin) return outcome.basin;
  const [first, ...others] = outcome.problems;
  if (others.length === 0) throw first;
  const cause = new AggregateError(others, `${others.length} more`);
  throw new BasinloomError(first.code, { ...first.parameters, more: others.length }, { cause });
}

/** All problems of a basin file in the order of its lines, those of overrides last; empty when it is valid. */
export function collectBasinFileProblems(
  text: string,
  file: string,
  overrides: Readonly<Record<string, string>> = {},
): BasinloomError[] {
  return validate(text, file, overrides).problems;
}

type Outcome =
  | { readonly basin: BasinFile; readonly problems: BasinloomError[] }
  | { readonly basin?: undefined; readonly problems: BasinloomError[] };

function validate(text: string, file: string, overrides: Readonly<Record<string, string>>): Outcome {
  const source = new Source(text, file, Object.keys(overrides));
  const data = source.read();
  if (data instanceof BasinloomError) return { problems: [data] };
  const broken = Object.entries(overrides).flatMap(([path, value]) => applyOverride(data, path, value) ?? []);
  const parsed = basinFileSchema.safeParse(data);
  const issues = parsed.success ? impossibleDates(parsed.data) : parsed.error.issues;
  const problems = [...withoutEchoes(issues.flatMap((issue) => describe(issue, data, source))), ...broken];
  if (parsed.success && problems.length === 0) return { basin: parsed.data, problems };
  return { problems: problems.sort((a, b) => source.order(a) - source.order(b)) };
}

/** The YAML document, and where in it (or in which override) a key path stands. */
class Source {
  readonly #file: string;
  readonly #lines = new LineCounter();
  readonly #document: Document;
  readonly #overrides: readonly KeyPath[];

  constructor(text: string, file: string, overrides: readonly string[]) {
    this.#file = file;
    this.#overrides = overrides.map(splitPath);
    // The core schema, even where a directive asks for another: "no" and 2025-04-01 stay text.
    const options = { schema: 'core', lineCounter: this.#lines, prettyErrors: false } as const;
    this.#document = parseDocument(text, options);
  }

  /** Plain values of the document, or why there are none. */
  read(): Record<string, unknown> | BasinloomError {
    const [error] = this.#document.errors;
    if (error) return this.#syntax(error.message, this.#lineAt(error.pos[0]));
    let data: unknown;
    try {
      data = this.#document.toJS() ?? {};
    } catch (thrown) {
      return this.#syntax((thrown as Error).message, 1);
    }
    if (isRecord(data)) return data;
    const detail = `${shown(data)} is not a basin file; it must be a group of keys (region, period, ...)`;
    return new BasinloomError('BASIN_FILE_VALUE', { file: this.#file, line: 1, key: 'basin file', detail });
  }

  /** Place parameters for messages about a key path. */
  place(path: KeyPath): { file: string; line: number } {
    const depth = this.#depth(path);
    const created = path.slice(0, depth + 1);
    // An override stands for its path and all below it, and for the groups that only it has made.
    const override =
      this.#overrides.find((given) => startsWith(path, given)) ??
      (depth < path.length ? this.#overrides.find((given) => startsWith(given, created)) : undefined);
    if (override) return { file: `--set ${override.join('.')}`, line: 1 };
    return { file: this.#file, line: this.#lineOf(path.slice(0, depth)) };
  }

  /** Sort key of a problem: line in the file, overrides behind all lines. */
  order({ parameters }: BasinloomError): number {
    return parameters.file === this.#file ? Number(parameters.line) : Number.MAX_SAFE_INTEGER;
  }

  /** Number of leading segments that the document has. */
  #depth(path: KeyPath): number {
    let depth = path.length;
    while (depth > 0 && !this.#document.hasIn(path.slice(0, depth))) depth--;
    return depth;
  }

  #lineOf(path: KeyPath): number {
    const last = path.at(-1);
    const parent = path.length > 1 ? this.#document.getIn(path.slice(0, -1), true) : this.#document.contents;
    const pair = isMap(parent)
      ? parent.items.find(({ key }) => isScalar(key) && String(key.value) === last)
      : undefined;
    const node = pair ? pair.key : this.#document.getIn(path, true);
    const range = isScalar(node) || isCollection(node) ? node.range : undefined;
    return this.#lineAt(range?.[0] ?? 0);
  }

  #lineAt(offset: number): number {
    return Math.max(1, this.#lines.linePos(offset).line);
  }

  #syntax(detail: string, line: number): BasinloomError {
    return new BasinloomError('BASIN_FILE_SYNTAX', { file: this.#file, line, detail });
  }
}

/** Puts an override into the data. @returns the problem when that cannot be done */
function applyOverride(data: Record<string, unknown>, dotted: string, text: string): BasinloomError | undefined {
  const place = { file: `--set ${dotted}`, line: 1 };
  const document = parseDocument(text, { schema: 'core', prettyErrors: false });
  const [error] = document.errors;
  if (error) return new BasinloomError('BASIN_FILE_SYNTAX', { ...place, detail: error.message });
  const path = splitPath(dotted);
  let parent: unknown = data;
  for (const [depth, segment] of path.entries()) {
    const inside = Array.isArray(parent) ? typeof segment === 'number' && segment <= parent.length : isRecord(parent);
    if (!inside) {
      const detail = `${path.slice(0, depth).join('.')} has no part "${segment}"`;
      return new BasinloomError('BASIN_FILE_VALUE', { ...place, key: dotted, detail });
    }
    const group = parent as Record<string | number, unknown>;
    const isLast = depth === path.length - 1;
    if (isLast || !Object.hasOwn(group, segment) || group[segment] === null) {
      const value = isLast ? document.toJS() : typeof path[depth + 1] === 'number' ? [] : {};
      // Not by assignment: "__proto__" must become a key like any other, and then an unknown one.
      Object.defineProperty(group, segment, { value, writable: true, enumerable: true, configurable: true });
    }
    parent = group[segment];
  }
  return undefined;
}

const SCHEMA = basinFileJsonSchema() as JsonSchemaNode;

/** One issue of the schema as problems: an unknown key each, or one wrong value. */
function describe(issue: Issue, data: unknown, source: Source): BasinloomError[] {
  const path = issue.path as KeyPath;
  if (issue.code === 'unrecognized_keys') {
    return (issue.keys ?? []).map((key) => {
      const parameters = { key: [...path, key].join('.'), suggestion: suggestKey(SCHEMA, path, key) };
      return new BasinloomError('BASIN_FILE_KEY', { ...source.place([...path, key]), ...parameters });
    });
  }
  const key = path.join('.') || 'basin file';
  const place = source.place(path);
  return [
    new BasinloomError('BASIN_FILE_VALUE', { ...place, key, detail: detailOf(issue, path, valueAt(data, path)) }),
  ];
}

interface Issue {
  readonly code: z.core.$ZodIssue['code'];
  readonly path: readonly PropertyKey[];
  readonly message: string;
  readonly keys?: readonly string[];
}

function detailOf(issue: Issue, path: KeyPath, value: unknown): string {
  if (issue.code === 'custom') return issue.message.replace(`${path.join('.')} `, '');
  const node = schemaNodeAt(SCHEMA, path) ?? {};
  const must = `it must be ${allowedWords(node)}`;
  if (value === undefined) return `is missing; ${must}`;
  const words = literalsOf(node).filter((literal) => typeof literal === 'string');
  const near = typeof value === 'string' && words.length > 1 ? `; did you mean "${closest(value, words)}"?` : '';
  return `${shown(value)} is not allowed; ${must}${near}`;
}

/** Leaves out "is missing" where an unknown key beside it is that key misspelt: one mistake, one message. */
function withoutEchoes(problems: readonly BasinloomError[]): BasinloomError[] {
  const meant = problems.flatMap(({ code, parameters }) => {
    const name = code === 'BASIN_FILE_KEY' && /"(.+)"/.exec(String(parameters.suggestion))?.[1];
    return name ? [[...String(parameters.key).split('.').slice(0, -1), name].join('.')] : [];
  });
  const isEcho = ({ parameters: { key, detail } }: BasinloomError) =>
    meant.includes(String(key)) && String(detail).startsWith('is missing');
  return problems.filter((problem) => !isEcho(problem));
}

/** Dates of the right form that no calendar has. */
function impossibleDates({ period }: BasinFile): Issue[] {
  return (['from', 'to'] as const).flatMap((name) => {
    const time = Date.parse(`${period[name]}T00:00:00Z`);
    const exists = !Number.isNaN(time) && new Date(time).toISOString().startsWith(period[name]);
    return exists
      ? []
      : [{ code: 'custom', path: ['period', name], message: `${period[name]} is not a date of the calendar` }];
  });
}

/** Segments of a dotted key path; whole numbers are list positions. */
function splitPath(dotted: string): KeyPath {
  return dotted.split('.').map((segment) => (/^\d+$/.test(segment) ? Number(segment) : segment));
}

function startsWith(path: KeyPath, start: KeyPath): boolean {
  return start.length <= path.length && start.every((segment, index) => segment === path[index]);
}

function valueAt(data: unknown, path: KeyPath): unknown {
  return path.reduce<unknown>(
    (value, segment) => (value as Record<string | number, unknown> | undefined)?.[segment],
    data,
  );
}

function shown(value: unknown): string {
  if (Array.isArray(value)) return value.length === 0 ? 'an empty list' : 'a list';
  if (isRecord(value)) return 'a group of keys';
  if (value === null) return 'an empty value';
  return typeof value === 'string' ? JSON.stringify(value) : String(value);
}
