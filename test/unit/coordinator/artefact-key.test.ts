import { describe, expect, it } from 'vitest';
import { artefactKey, canonicalJson, digest } from '../../../services/coordinator/artefact-key.ts';

describe('artefact names', () => {
  it('do not depend on the order of keys, but on every value', () => {
    const name = artefactKey('flux', { a: 1, b: { c: [1, 2], d: 'x' } });
    expect(artefactKey('flux', { b: { d: 'x', c: [1, 2] }, a: 1 })).toBe(name);
    expect(artefactKey('flux', { a: 1, b: { c: [2, 1], d: 'x' } })).not.toBe(name);
    expect(artefactKey('day', { a: 1, b: { c: [1, 2], d: 'x' } })).not.toBe(name);
  });

  it('are store keys, spread over folders by their first two digits', () => {
    expect(artefactKey('prepare', 1, '.summary')).toMatch(
      /^artefacts\/prepare\/([0-9a-f]{2})\/\1[0-9a-f]{38}\.summary$/,
    );
  });

  it('tell -0 from nothing else and keep undefined out', () => {
    expect(canonicalJson({ b: undefined, a: -0 })).toBe('{"a":0}');
    expect(digest({ a: undefined })).toBe(digest({}));
  });
});
