import type { AlbedoModel, ReflectanceRole } from '../contract/scene.ts';

export type AlbedoWeights = Readonly<Record<ReflectanceRole, number>>;

/**
 * Weights of surface reflectance in the broadband albedo.
 * TM and ETM+: Tasumi, Allen & Trezza 2008 (J. Hydrol. Eng. 13:51-63).
 * OLI: Ke, Im, Park & Gong 2016 (Remote Sens. 8:215).
 */
export const ALBEDO_WEIGHTS: Readonly<Record<AlbedoModel, AlbedoWeights>> = {
  tm: { blue: 0.254, green: 0.149, red: 0.147, nir: 0.311, swir1: 0.103, swir2: 0.036 },
  oli: { blue: 0.246, green: 0.146, red: 0.191, nir: 0.304, swir1: 0.105, swir2: 0.008 },
};
