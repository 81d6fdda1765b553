import type { ProductName } from '../contract/products.ts';
import type { OutputPlane } from './planes.ts';

/** Planes that a flux tile can keep: what the kernel puts out, and the surface temperature that it got. */
export type FluxPlane = OutputPlane | 'lst';

/** Plane behind each product that is a plain copy of a flux plane. */
export const PRODUCT_PLANE: Partial<Record<ProductName, FluxPlane>> = {
  'net-radiation': 'netRadiation',
  'soil-heat': 'soilHeat',
  'sensible-heat': 'sensibleHeat',
  'latent-heat': 'latentHeat',
  'evaporative-fraction': 'evaporativeFraction',
  'surface-temperature': 'lst',
};

/**
 * Planes that the asked products need, whatever their order; the day fraction always, since everything later rests on
 * it.
 */
export function storedPlanes(products: readonly ProductName[]): FluxPlane[] {
  const extra = new Set(products.flatMap((product) => PRODUCT_PLANE[product] ?? []));
  return ['dayFraction', ...[...extra].sort()];
}
