import { describe, expect, it } from 'vitest';
import { DAY_QUALITY as Q } from '../../../shared/contract/quality.ts';
import { qaTables, qualityFromQa } from '../../../shared/scenes/qa.ts';

describe('saturation', () => {
  it.each([
    ['oli', 0, 0, 'coastal aerosol is not used'],
    ['oli', 1, Q.saturated, 'blue'],
    ['oli', 6, Q.saturated, 'swir2'],
    ['oli', 8, 0, 'cirrus band is not used'],
    ['oli', 9, 0, 'no meaning on OLI'],
    ['oli', 11, Q.saturated, 'terrain occlusion'],
    ['tm', 0, Q.saturated, 'blue'],
    ['tm', 5, Q.saturated, 'thermal'],
    ['tm', 6, Q.saturated, 'swir2'],
    ['tm', 8, 0, 'high gain of the thermal band'],
    ['tm', 9, Q.fill, 'dropped pixel'],
    ['tm', 11, 0, 'no meaning on TM'],
  ] as const)('%s bit %i gives %i: %s', (model, bit, expected, _) => {
    expect(qualityFromQa(64, 1 << bit, model)).toBe(expected);
  });

  it('counts only the bands used', () => {
    expect(qualityFromQa(64, 0b10, 'oli', ['red'])).toBe(0);
    expect(qualityFromQa(64, 0b1000, 'oli', ['red'])).toBe(Q.saturated);
  });
});

describe('the tables', () => {
  it.each(['tm', 'oli'] as const)('hold what the function gives, for every value (%s)', (model) => {
    const { pixel, radsat } = qaTables(model);
    let different = 0;
    for (let value = 0; value < 65536; value++) {
      if (pixel[value] !== qualityFromQa(value, 0, model)) different++;
      if (radsat[value] !== qualityFromQa(0, value, model)) different++;
      const other = (value * 40503) & 0xffff;
      if ((pixel[value] | radsat[other]) !== qualityFromQa(value, other, model)) different++;
    }
    expect(different).toBe(0);
  });
});
