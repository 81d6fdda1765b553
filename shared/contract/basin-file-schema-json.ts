import { distance } from 'fastest-levenshtein';
import { z } from 'zod';
import { basinFileSchema } from './basin-file.ts';

/** The part of JSON Schema (draft 2020-12) that the schema of the basin file uses. */
export interface JsonSchemaNode {
  readonly type?: string;
  readonly title?: string;
  readonly description?: string;
  readonly default?: unknown;
  readonly properties?: Readonly<Record<string, JsonSchemaNode>>;
  readonly required?: readonly string[];
  readonly items?: JsonSchemaNode;
  readonly anyOf?: readonly JsonSchemaNode[];
  readonly enum?: readonly unknown[];
  readonly const?: unknown;
  readonly pattern?: string;
  readonly minimum?: number;
  readonly maximum?: number;
  readonly exclusiveMinimum?: number;
  readonly minLength?: number;
  readonly minItems?: number;
  readonly maxItems?: number;
}

/** JSON Schema of the basin file as a person writes it: defaults are optional. For editors and `basinloom schema`. */
export function basinFileJsonSchema(): object {
  const { $schema, ...schema } = z.toJSONSchema(basinFileSchema, {
    io: 'input',
    // The largest integer of the language is no limit of the basin file.
    override: ({ jsonSchema }) => {
      if (jsonSchema.maximum === Number.MAX_SAFE_INTEGER) delete jsonSchema.maximum;
    },
  });
  return {
    $schema,
    title: 'basinloom basin file',
    description: 'Region, grid, period, inputs, method and products of one run (basin.yaml).',
    ...schema,
  };
}

/** The node that describes a key path; list positions are numbers. Undefined for an unknown path. */
export function schemaNodeAt(schema: JsonSchemaNode, path: readonly (string | number)[]): JsonSchemaNode | undefined {
  let node: JsonSchemaNode | undefined = schema;
  for (const segment of path) node = typeof segment === 'number' ? node?.items : ownProperty(node, segment);
  return node;
}

function ownProperty(node: JsonSchemaNode | undefined, key: string): JsonSchemaNode | undefined {
  return node?.properties && Object.hasOwn(node.properties, key) ? node.properties[key] : undefined;
}

/** Literal values among which a key may choose; empty when other values are allowed too or none is literal. */
export function literalsOf(node: JsonSchemaNode): unknown[] {
  if (node.const !== undefined) return [node.const];
  if (node.enum) return [...node.enum];
  const branches = node.anyOf?.map(literalsOf) ?? [];
  return branches.every((values) => values.length > 0) ? branches.flat() : [];
}

const PATTERN_WORDS: Readonly<Record<string, string>> = {
  '^\\d{4}-\\d{2}-\\d{2}$': 'a date YYYY-MM-DD',
  '^EPSG:\\d+$': 'text like EPSG:3035',
  '^rediss?:\\/\\/[^@\\s]+$': 'text like redis://host:6379',
};

/** What a key accepts, in words: "one of month, whole", "a number from 0 to 1". */
export function allowedWords(node: JsonSchemaNode): string {
  const literals = literalsOf(node);
  if (literals.length === 1) return JSON.stringify(literals[0]);
  if (literals.length > 1) return `one of ${literals.map((value) => JSON.stringify(value)).join(', ')}`;
  if (node.anyOf) return node.anyOf.map(allowedWords).join(' or ');
  switch (node.type) {
    case 'boolean':
      return 'true or false';
    case 'integer':
      return `a whole number${rangeWords(node)}`;
    case 'number':
      return `a number${rangeWords(node)}`;
    case 'string':
      return node.pattern ? (PATTERN_WORDS[node.pattern] ?? `text like ${node.pattern}`) : 'text';
    case 'array':
      return `a list of ${countWords(node)}, each ${allowedWords(node.items ?? {})}`;
    default:
      return 'a group of keys';
  }
}

function rangeWords({ minimum, maximum, exclusiveMinimum }: JsonSchemaNode): string {
  if (minimum !== undefined && maximum !== undefined) return ` from ${minimum} to ${maximum}`;
  if (exclusiveMinimum !== undefined)
    return ` above ${exclusiveMinimum}${maximum === undefined ? '' : ` to ${maximum}`}`;
  if (minimum !== undefined) return ` of at least ${minimum}`;
  return maximum === undefined ? '' : ` of at most ${maximum}`;
}

/** How many entries a list may have: "1 or more". */
export function countWords({ minItems = 0, maxItems }: JsonSchemaNode): string {
  if (minItems === maxItems) return `exactly ${minItems}`;
  return maxItems === undefined ? `${minItems} or more` : `${minItems} to ${maxItems}`;
}

/** Slips of the keyboard that are surely meant for the nearest key. */
const SURE_SLIPS = 2;

/**
 * What to say behind an unknown key: the nearest key of its group, the same key of another group, or, when nothing is
 * near, what the group holds.
 */
export function suggestKey(schema: JsonSchemaNode, path: readonly (string | number)[], key: string): string {
  const here = Object.keys(schemaNodeAt(schema, path)?.properties ?? {});
  if (here.length === 0) return '';
  const wanted = key.toLowerCase();
  const slips = here.map((name) => distance(wanted, name.toLowerCase()));
  const fewest = Math.min(...slips);
  const elsewhere = fewest > SURE_SLIPS ? findKey(schema, key) : undefined;
  if (elsewhere) return `; did you mean "${elsewhere}"?`;
  if (fewest > Math.ceil(wanted.length / 2)) return `; the keys here are ${here.join(', ')}`;
  return `; did you mean "${here[slips.indexOf(fewest)]}"?`;
}

/** Dotted path of a key of this name anywhere in the schema. */
function findKey(node: JsonSchemaNode, name: string): string | undefined {
  for (const [key, child] of Object.entries(node.properties ?? {})) {
    if (key === name) return key;
    const below = findKey(child, name);
    if (below) return `${key}.${below}`;
  }
  return undefined;
}
