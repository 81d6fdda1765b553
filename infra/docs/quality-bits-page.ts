import { DAY_QUALITY_BITS, DAY_UNUSABLE, PERIOD_QUALITY_BITS, type QualityBit } from '../../shared/contract/quality.ts';
import { code, page, table } from './markdown.ts';

/** docs/reference/quality-bits.md. */
export function qualityBitsPage(): string {
  const cells = ({ bit, name, meaning }: QualityBit) => [String(bit), String(2 ** bit), code(name), meaning];
  return page('Quality bits', [
    'The products `quality-day` and `quality-period` are bit fields of 16 bits. A set bit names something that was ' +
      'masked, filled, clipped or borrowed at the pixel; 0 says that nothing of the kind happened. A value is the sum ' +
      'of the weights of its bits.',
    '## quality-day',
    table(
      ['Bit', 'Weight', 'Name', 'Meaning', 'Value of the pixel'],
      DAY_QUALITY_BITS.map((entry) => [...cells(entry), (DAY_UNUSABLE >> entry.bit) & 1 ? 'nodata' : 'kept']),
    ),
    '## quality-period',
    table(['Bit', 'Weight', 'Name', 'Meaning'], PERIOD_QUALITY_BITS.map(cells)),
  ]);
}
