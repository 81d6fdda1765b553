import type { ProductName } from './products.ts';

/** Store key of a product file: what the reader of the output folder sees. */
export function productKey(product: ProductName, when: string): string {
  return `products/${when}/${product}.tif`;
}

/**
 * Store key of the marker that says which mosaic record a product file belongs to. It is written after the file:
 * a crash between the two makes the file again.
 */
export function productMarkerKey(product: ProductName, when: string): string {
  return `artefacts/published/${when}/${product}`;
}
