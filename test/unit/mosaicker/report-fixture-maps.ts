import { mapPng, mapStyle } from '../../../services/mosaicker/pictures.ts';
import type { MapFigure, MapOutline } from '../../../services/mosaicker/report/model.ts';
import type { ProductName } from '../../../shared/contract/products.ts';

const SIZE = { width: 420, height: 340 };

function shape(x: number, y: number): number {
  const angle = Math.atan2(y - 0.5, x - 0.5);
  return 0.42 + 0.05 * Math.sin(3 * angle) + 0.03 * Math.cos(5 * angle) - Math.hypot(x - 0.5, (y - 0.5) * 0.95);
}

function outlines(): MapOutline[] {
  const edge: string[] = [];
  for (let i = 0; i < 120; i++) {
    const angle = (i / 120) * 2 * Math.PI;
    let reach = 0.1;
    while (shape(0.5 + reach * Math.cos(angle), 0.5 + reach * Math.sin(angle)) > 0) reach += 0.002;
    const x = (0.5 + reach * Math.cos(angle)) * SIZE.width;
    const y = (0.5 + reach * Math.sin(angle)) * SIZE.height;
    edge.push(`${i === 0 ? 'M' : 'L'}${x.toFixed(1)} ${y.toFixed(1)}`);
  }
  return [
    { kind: 'zone', name: 'north and south', path: 'M34 160L150 180L250 150L380 190' },
    { kind: 'zone', name: 'east and west', path: 'M210 24L220 160L190 316' },
    { kind: 'boundary', name: 'basin', path: `${edge.join('')}Z` },
  ];
}

/** A map of an invented basin: a river with irrigated land, clouds. */
export async function map(product: ProductName, when: string, level: number, cloud: number): Promise<MapFigure> {
  const { width, height } = SIZE;
  const values = new Float32Array(width * height);
  const inside = new Uint8Array(width * height);
  let sum = 0;
  let valid = 0;
  let total = 0;
  for (let i = 0; i < values.length; i++) {
    const x = (i % width) / width;
    const y = Math.floor(i / width) / height;
    if (shape(x, y) < 0) continue;
    inside[i] = 1;
    total++;
    const river = Math.exp(-(((y - 0.5 - 0.18 * Math.sin(5 * x)) / 0.07) ** 2));
    const fields = Math.sin(90 * x) * Math.sin(70 * y) > 0.1 ? 0.12 : 0;
    const clouds =
      Math.sin(7 * x + level) + Math.cos(9 * y - level * 3) + 0.5 * Math.sin(23 * x * y) > 1.6 - 1.6 * cloud;
    values[i] =
      clouds && cloud > 0 ? Number.NaN : level * (0.3 + 0.75 * river + fields + 0.15 * Math.sin(6 * x + 4 * y));
    if (!Number.isNaN(values[i])) {
      sum += values[i];
      valid++;
    }
  }
  const style = mapStyle(product, [0, product === 'et-period' ? 180 : product === 'et-day' ? 7.6 : 1.1]);
  const png = await mapPng({ width, height, values, inside, range: style.range, palette: style.palette });
  return {
    product,
    when,
    png,
    width,
    height,
    style,
    outlines: outlines(),
    metresPerPixel: 90,
    validFraction: valid / total,
    mean: sum / valid,
    ...(product === 'et-day' ? { passes: [`${when}-landsat8-p033`] } : {}),
  };
}
