import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { BasinloomError } from '../../../shared/contract/errors.ts';
import { newSamples, type SampleType } from '../../../shared/raster/sample-type.ts';
import { decodePlanes, encodePlanes } from '../../../shared/raster/tile-codec.ts';

const TYPES = ['uint8', 'int16', 'uint16', 'int32', 'uint32', 'float32', 'float64'] as const satisfies SampleType[];

const codeOf = (work: () => unknown): string => {
  try {
    work();
    return 'no error';
  } catch (error) {
    return error instanceof BasinloomError ? error.code : String(error);
  }
};

describe('artefacts of planes', () => {
  it('give back header and planes bit for bit', () => {
    const plane = fc.tuple(fc.constantFrom(...TYPES), fc.array(fc.double(), { maxLength: 70 }));
    fc.assert(
      fc.property(fc.dictionary(fc.string(), plane), fc.jsonValue(), (given, header) => {
        const planes = Object.fromEntries(
          Object.entries(given).map(([name, [type, values]]) => {
            const samples = newSamples(type, values.length);
            samples.set(values);
            return [name, samples];
          }),
        );
        const decoded = decodePlanes(encodePlanes(header, planes), 'key');
        expect(decoded.planes).toEqual(planes);
        expect(decoded.header).toEqual(JSON.parse(JSON.stringify(header)));
      }),
      // A name that plain assignment to an object loses.
      { numRuns: 50, examples: [[{ ['__proto__']: ['uint8', []] }, {}]] },
    );
  });

  const header = { pass: 'a', counts: [1, 2] };
  const lst = Float32Array.from({ length: 900 }, (_, i) => 300 + Math.sin(i / 30));
  const bytes = encodePlanes(header, { lst, quality: new Uint16Array(900).fill(3) });

  it('are equal bytes for equal content', () => {
    expect(encodePlanes(header, { lst: lst.slice(), quality: new Uint16Array(900).fill(3) })).toEqual(bytes);
  });

  it('give only the wanted planes', () => {
    const { planes } = decodePlanes(bytes, 'key', ['quality']);
    expect(Object.keys(planes)).toEqual(['quality']);
    expect(planes.quality[899]).toBe(3);
  });

  it('are taken from any place of a larger buffer', () => {
    const shifted = Buffer.concat([Buffer.from([7]), bytes]).subarray(1);
    expect(decodePlanes(shifted, 'key').planes.lst).toEqual(lst);
  });

  it('are refused as ARTEFACT_CORRUPT when any bit is turned', () => {
    for (let at = 0; at < bytes.length; at += at < 200 ? 1 : 13) {
      const damaged = new Uint8Array(bytes);
      damaged[at] ^= 1 << (at % 8);
      expect(
        codeOf(() => decodePlanes(damaged, 'k')),
        `byte ${at}`,
      ).toBe('ARTEFACT_CORRUPT');
    }
  });

  it('are refused when cut short or empty', () => {
    for (const length of [0, 5, 11, 12, 40, bytes.length - 1]) {
      expect(
        codeOf(() => decodePlanes(bytes.subarray(0, length), 'k')),
        `${length} bytes`,
      ).toBe('ARTEFACT_CORRUPT');
    }
  });
});
