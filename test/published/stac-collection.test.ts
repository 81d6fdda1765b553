import { describe, expect, it } from 'vitest';
import { stacCollection } from '../../services/mosaicker/stac.ts';
import { grid, input, item, RFC3339, read } from './stac-fixture.ts';

/** Against the text of the SpatioTemporal Asset Catalog specification 1.1.0 (collection-spec/collection-spec.md). */
describe('STAC 1.1.0 collection (collection-spec.md)', () => {
  const collection = read(
    stacCollection({
      id: 'orrin-evapotranspiration',
      title: 'Orrin',
      description: 'Evapotranspiration of the Orrin basin.',
      grid,
      interval: ['2025-06-01T00:00:00Z', '2025-06-30T23:59:59Z'],
      items: [{ id: '2025-06-12', title: '12 June 2025' }],
      products: ['et-period', 'et-day'],
      software: { basinloom: '0.1.0' },
    }),
  );

  it('has all required fields', () => {
    expect(collection.type).toBe('Collection');
    expect(collection.stac_version).toBe('1.1.0');
    for (const field of ['id', 'description', 'license', 'extent', 'links']) expect(collection).toHaveProperty(field);
    expect(collection.extent.spatial.bbox[0]).toEqual(item.bbox);
    for (const moment of collection.extent.temporal.interval[0]) expect(moment).toMatch(RFC3339);
  });

  it('links to its items, which link back', () => {
    const [link] = collection.links.filter(({ rel }: { rel: string }) => rel === 'item');
    expect(link.href).toBe('./2025-06-12/item.json');
    expect(
      new URL(input.collectionHref ?? '../collection.json', `file:///products/2025-06-12/item.json`).pathname,
    ).toBe('/products/collection.json');
    expect(collection.id).toBe(item.collection);
  });

  it('describes the assets of its items', () => {
    expect(Object.keys(collection.item_assets)).toEqual(['et-day', 'et-period']);
    expect(collection.item_assets['et-day']).not.toHaveProperty('href');
    expect(collection.item_assets['et-day'].unit).toBe('mm');
  });
});
