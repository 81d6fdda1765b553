import {
  allowedWords,
  basinFileJsonSchema,
  countWords,
  type JsonSchemaNode,
} from '../../shared/contract/basin-file-schema-json.ts';
import { code, page, table } from './markdown.ts';

/** The smallest basin file; a test holds it to the schema. */
export const SMALLEST_BASIN_FILE = `region:
  name: Orrin
  boundary: basin.geojson
period:
  from: 2025-04-01
  to: 2025-09-30
scenes:
  - source: landsat-level-2
    path: scenes/
weather:
  - source: station-csv
    path: weather/stations.csv
`;

/** docs/reference/basin-file.md: every key of the schema. */
export function basinFilePage(): string {
  const schema = basinFileJsonSchema() as JsonSchemaNode;
  return page('The basin file', [
    'A run is described by one YAML file, by custom `basin.yaml`. Paths in it are relative to it. Unknown keys are ' +
      'errors: a misspelt key never falls back to its default unseen. `basinloom schema` prints the same description ' +
      'as JSON Schema, for editors.',
    'The smallest basin file; all other keys have defaults:',
    `\`\`\`yaml\n${SMALLEST_BASIN_FILE}\`\`\``,
    '`--set key=value` changes a key for one call. The key is written with dots, list positions as numbers from 0, and ' +
      'the value as YAML: `--set grid.tile=256`, `--set scenes.0.path=archive/`, `--set products=[et-period]`.',
    ...sections(schema, []),
  ]);
}

/** One section for the keys of a group, then those of the groups in it. */
function sections(node: JsonSchemaNode, path: readonly string[], introduction = ''): string[] {
  const { properties = {}, required = [] } = node;
  const children = Object.entries(properties);
  const rows = children
    .filter(([, child]) => !groupOf(child))
    .map(([key, child]) => [
      code(key),
      allowedWords(child),
      defaultWords(child, required.includes(key)),
      meaning(child),
    ]);
  const heading = path.length === 0 ? '## Keys at the top' : `## ${path.join('.')}`;
  const head = introduction === '' ? [heading] : [heading, introduction];
  const own = rows.length > 0 ? [...head, table(['Key', 'Value', 'Default', 'Meaning'], rows)] : [];
  const below = children.flatMap(([key, child]) => {
    const group = groupOf(child);
    const place = [...path, child.type === 'array' ? `${key}[]` : key];
    return group ? sections(group, place, introductionOf(child, required.includes(key))) : [];
  });
  return [...own, ...below];
}

function introductionOf(node: JsonSchemaNode, isRequired: boolean): string {
  const parts = [
    node.description ? `${node.description}.` : '',
    node.type === 'array' ? `${capitalised(countWords(node))} of:` : '',
    !isRequired && node.default === undefined ? 'May be left out as a whole.' : '',
  ];
  return parts.filter((part) => part !== '').join(' ');
}

function capitalised(text: string): string {
  return text.charAt(0).toUpperCase() + text.slice(1);
}

/** The group of keys that a node is, or is a list of. */
function groupOf(node: JsonSchemaNode): JsonSchemaNode | undefined {
  if (node.properties) return node;
  return node.items?.properties ? node.items : undefined;
}

function defaultWords(node: JsonSchemaNode, isRequired: boolean): string {
  if (node.default !== undefined)
    return code(Array.isArray(node.default) ? node.default.join(', ') : String(node.default));
  return isRequired ? 'required' : 'none';
}

function meaning({ description = '' }: JsonSchemaNode): string {
  return description;
}
