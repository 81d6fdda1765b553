import type { ProductName } from '../../shared/contract/products.ts';
import type { OutputPlane } from '../../shared/flux/planes.ts';

/** Planes that a flux tile can keep, and where each comes from. */
export const FLUX_PLANES = {
  dayFraction: { from: 'output', plane: 'dayFraction' },
  netRadiation: { from: 'output', plane: 'netRadiation' },
  soilHeat: { from: 'output', plane: 'soilHeat' },
  sensibleHeat: { from: 'output', plane: 'sensibleHeat' },
  latentHeat: { from: 'output', plane: 'latentHeat' },
  evaporativeFraction: { from: 'output', plane: 'evaporativeFraction' },
  lst: { from: 'input' },
} as const satisfies Record<string, { from: 'input' } | { from: 'output'; plane: OutputPlane }>;

export type FluxPlane = keyof typeof FLUX_PLANES;

/** Plane behind each product that is a plain copy of a flux plane. */
export const PRODUCT_PLANE: Partial<Record<ProductName, FluxPlane>> = {
  'net-radiation': 'netRadiation',
  'soil-heat': 'soilHeat',
  'sensible-heat': 'sensibleHeat',
  'latent-heat': 'latentHeat',
  'evaporative-fraction': 'evaporativeFraction',
  'surface-temperature': 'lst',
};

/** Planes that the asked products need; the day fraction always, since everything later rests on it. */
export function storedPlanes(products: readonly ProductName[]): FluxPlane[] {
  const extra = products.flatMap((product) => PRODUCT_PLANE[product] ?? []);
  return ['dayFraction', ...new Set(extra)];
}
