import { type MtlRecord, MtlSyntaxError, type MtlValue, ROOT_GROUP } from './mtl-record.ts';

const ASSIGNMENT = /^(\w+)\s*=\s*(.*)$/;

/**
 * Reads the ODL text form of an MTL file: `GROUP = name`, `KEY = value`, `END_GROUP = name`, `END`. Text values stand
 * in double quotes. What follows END is padding.
 *
 * @throws MtlSyntaxError with the line, also when the file ends before END
 */
export function parseMtlText(text: string): MtlRecord {
  const record = new Map<string, Map<string, MtlValue>>();
  const open: string[] = [];
  let number = 0;
  for (const raw of text.split(/\r?\n/)) {
    number++;
    const place = `line ${number}`;
    const line = raw.trim();
    if (line === '') continue;
    if (line === 'END') {
      if (open.length > 0) throw new MtlSyntaxError(place, `END inside group ${open.at(-1)}`);
      if (!record.has(ROOT_GROUP)) throw new MtlSyntaxError('file', notCollection2(record));
      return record;
    }
    const [, key, value] = ASSIGNMENT.exec(line) ?? [];
    if (key === undefined) throw new MtlSyntaxError(place, `"${line.slice(0, 40)}" is not KEY = value`);
    if (key === 'GROUP') {
      open.push(value);
      if (!record.has(value)) record.set(value, new Map());
    } else if (key === 'END_GROUP') {
      if (open.pop() !== value) throw new MtlSyntaxError(place, `END_GROUP = ${value} closes another group`);
    } else {
      setOnce(record.get(open.at(-1) ?? ''), key, { text: unquoted(value, place), line: number });
    }
  }
  const inside = open.length > 0 ? `inside group ${open.at(-1)}` : 'without END';
  throw new MtlSyntaxError(`line ${number}`, `the file ends ${inside}: it is incomplete`);
}

function setOnce(group: Map<string, MtlValue> | undefined, key: string, value: MtlValue): void {
  const place = `line ${value.line}`;
  if (!group) throw new MtlSyntaxError(place, `${key} stands outside of any group`);
  const known = group.get(key);
  if (known && known.text !== value.text) throw new MtlSyntaxError(place, `${key} is given twice with other values`);
  group.set(key, value);
}

function unquoted(value: string, place: string): string {
  if (!value.startsWith('"')) return value;
  if (value.length < 2 || !value.endsWith('"')) throw new MtlSyntaxError(place, 'a quoted value is not closed');
  return value.slice(1, -1);
}

function notCollection2(record: ReadonlyMap<string, unknown>): string {
  const [first = 'no group'] = record.keys();
  return `it begins with ${first}, not ${ROOT_GROUP}: not a Collection 2 MTL file`;
}
