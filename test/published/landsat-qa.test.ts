import { describe, expect, it } from 'vitest';
import { DAY_UNUSABLE, DAY_QUALITY as Q } from '../../shared/contract/quality.ts';
import { qualityFromQa } from '../../shared/scenes/qa.ts';

/*
 * Values of the QA_PIXEL code tables of USGS LSDS-1619 (Landsat 8-9) and LSDS-1618 (Landsat 4-7), Collection 2 Level 2
 * Science Product Guides; from memory. Each code also follows from the bit table of the same guides.
 */
describe('QA_PIXEL of OLI/TIRS (USGS LSDS-1619)', () => {
  it.each([
    [1, Q.fill, 'Q6 fill'],
    [21824, 0, 'Q1 clear, all confidences low'],
    [21826, Q.cloud, 'Q4 dilated cloud over land, although bit 6 says clear'],
    [21888, Q.water, 'water, all confidences low'],
    [21890, Q.cloud | Q.water, 'dilated cloud over water'],
    [21952, Q.water, 'Q2 water, clear'],
    [22080, 0, 'cloud of medium confidence: the cloud flag is not set'],
    [22144, Q.water, 'the same over water'],
    [22280, Q.cloud, 'cloud of high confidence'],
    [23888, Q.cloudShadow, 'cloud shadow of high confidence'],
    [23952, Q.cloudShadow | Q.water, 'cloud shadow over water'],
    [30048, Q.snow, 'snow of high confidence'],
    [54596, Q.cloud, 'Q5 cirrus of high confidence'],
    [54852, Q.cloud, 'cirrus and cloud of medium confidence'],
    [55052, Q.cloud, 'cirrus and cloud of high confidence'],
  ])('%i: %i, %s', (value, expected, _) => {
    expect(qualityFromQa(value, 0, 'oli')).toBe(expected);
  });
});

describe('QA_PIXEL of TM and ETM+ (USGS LSDS-1618)', () => {
  it.each([
    [1, Q.fill, 'fill'],
    [5440, 0, 'Q3 clear, all confidences low'],
    [5442, Q.cloud, 'dilated cloud over land'],
    [5504, Q.water, 'clear water'],
    [5896, Q.cloud, 'cloud of high confidence'],
    [7440, Q.cloudShadow, 'cloud shadow of high confidence'],
    [13664, Q.snow, 'snow of high confidence'],
  ])('%i: %i, %s', (value, expected, _) => {
    expect(qualityFromQa(value, 0, 'tm')).toBe(expected);
  });

  it('bit 2 is unused: no cirrus band', () => {
    expect(qualityFromQa(5440 | 4, 0, 'tm')).toBe(0);
    expect(qualityFromQa(5440 | 4, 0, 'oli')).toBe(Q.cloud);
  });
});

describe('QA_RADSAT (USGS LSDS-1618, LSDS-1619)', () => {
  it.each([
    ['oli', 0b1000, 'band 4, red'],
    ['oli', 1 << 11, 'terrain occlusion'],
    ['tm', 1 << 5, 'band 6, low gain'],
    ['tm', 1 << 6, 'band 7'],
    ['tm', 1 << 9, 'dropped pixel'],
  ] as const)('%s %i is not used (%s)', (model, value, _) => {
    expect(qualityFromQa(21824, value, model) & DAY_UNUSABLE).not.toBe(0);
  });
});
