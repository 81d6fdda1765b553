import { basinFileJsonSchema } from '../../../shared/contract/basin-file-schema-json.ts';
import { EXIT } from '../../../shared/contract/exit-codes.ts';

/** `basinloom schema`. */
export async function schema(): Promise<number> {
  process.stdout.write(`${JSON.stringify(basinFileJsonSchema(), null, 2)}\n`);
  return EXIT.ok;
}
