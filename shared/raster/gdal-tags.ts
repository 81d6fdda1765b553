import { newSamples, type SampleType } from './sample-type.ts';

/**
 * Nodata value of GDAL's tag 42113, which is text, as the samples hold it; "0" is a value like any other.
 *
 * @returns null for none, or for one that a sample of the type cannot hold: no pixel has it
 */
export function nodataOf(value: unknown, type: SampleType): number | null {
  if (typeof value !== 'string') return null;
  const number = numberOf(value.replaceAll('\0', '').trim().toLowerCase());
  if (number === null) return null;
  const [held] = newSamples(type, 1).fill(number);
  // Floats round: a value written with too few digits is meant for the sample that is nearest.
  return type.startsWith('float') || held === number ? held : null;
}

function numberOf(text: string): number | null {
  if (/^[+-]?nan$/.test(text)) return Number.NaN;
  const infinite = /^([+-]?)inf(inity)?$/.exec(text);
  if (infinite) return infinite[1] === '-' ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
  const number = Number(text);
  return text === '' || Number.isNaN(number) ? null : number;
}

/** Scale and offset of the first band from GDAL's metadata XML (tag 42112); 1 and 0 where it has none. */
export function scaling(metadata: unknown): [scale: number, offset: number] {
  let scale = 1;
  let offset = 0;
  if (typeof metadata !== 'string') return [scale, offset];
  for (const [, attributes, content] of metadata.matchAll(/<Item([^>]*)>([^<]*)<\/Item>/g)) {
    const number = Number(content);
    if (!/\bsample="0"/.test(attributes) || content.trim() === '' || !Number.isFinite(number)) continue;
    if (/\brole="scale"/.test(attributes)) scale = number;
    if (/\brole="offset"/.test(attributes)) offset = number;
  }
  return [scale, offset];
}
