import { BasinloomError } from '../contract/errors.ts';

const SEGMENT = /^[A-Za-z0-9._-]+$/;

/** True for segments of [A-Za-z0-9._-] joined by "/", none of them "." or "..". */
export function isKey(text: string): boolean {
  return text.split('/').every((part) => SEGMENT.test(part) && part !== '.' && part !== '..');
}

/** @throws BasinloomError INTERNAL for a key that is not a plain relative path */
export function checkKey(key: string): string {
  if (!isKey(key)) throw new BasinloomError('INTERNAL', { detail: `"${key}" is not a store key` });
  return key;
}

/**
 * True for an artefact named by the hash of what determines it: whoever writes it writes the same bytes, so the
 * first may win. Not all below artefacts/ is: the markers of published products change.
 */
export function isContentNamed(key: string): boolean {
  return /^artefacts\/[^/]+\/[0-9a-f]{2}\/[0-9a-f]{40}(\.|$)/.test(key);
}
