import type { AlbedoModel, ReflectanceRole } from '../../contract/scene.ts';

/** Which band plays which role. */
export interface SensorBands {
  readonly model: AlbedoModel;
  /** Number of the surface reflectance band, as MTL keys have it. */
  readonly reflectance: Readonly<Record<ReflectanceRole, number>>;
  /** Name of the surface temperature band, as MTL keys have it. */
  readonly temperature: string;
}

const TM: SensorBands = {
  model: 'tm',
  reflectance: { blue: 1, green: 2, red: 3, nir: 4, swir1: 5, swir2: 7 },
  temperature: 'ST_B6',
};

const OLI: SensorBands = {
  model: 'oli',
  reflectance: { blue: 2, green: 3, red: 4, nir: 5, swir1: 6, swir2: 7 },
  temperature: 'ST_B10',
};

/**
 * Sensors by SENSOR_ID of the MTL file (USGS LSDS-1618 for TM and ETM+, LSDS-1619 for OLI/TIRS). OLI alone is listed
 * so that the scene is refused for its missing temperature, not for an unknown sensor.
 */
export const SENSORS: Readonly<Record<string, SensorBands>> = { TM, ETM: TM, OLI_TIRS: OLI, OLI };
