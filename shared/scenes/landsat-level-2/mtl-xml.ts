import { XMLParser, XMLValidator } from 'fast-xml-parser';
import { type MtlRecord, MtlSyntaxError, recordOfTree } from './mtl-record.ts';

/** Values stay text: numbers are read where they are asked for, as with the other forms. */
const parser = new XMLParser({ parseTagValue: false, ignoreAttributes: true, ignoreDeclaration: true });

/** Reads the XML form of an MTL file. @throws MtlSyntaxError with the line where the XML breaks */
export function parseMtlXml(text: string): MtlRecord {
  const valid = XMLValidator.validate(text);
  if (valid !== true) throw new MtlSyntaxError(`line ${valid.err.line}`, `not valid XML: ${valid.err.msg}`);
  return recordOfTree(parser.parse(text));
}
