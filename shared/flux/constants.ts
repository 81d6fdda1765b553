/** Constants of the SEBAL and METRIC chain, as in Allen, Tasumi & Trezza 2007 (J. Irrig. Drain. Eng. 133:380-394). */
export const SOLAR_CONSTANT = 1367;
/** W m-2 K-4. */
export const STEFAN_BOLTZMANN = 5.67e-8;
export const VON_KARMAN = 0.41;
/** m s-2. */
export const GRAVITY = 9.81;
/** Specific heat of air, J kg-1 K-1. */
export const AIR_HEAT = 1004;
/** K. */
export const ZERO_CELSIUS = 273.15;
/** The two heights between which the near-surface temperature difference is taken, m. */
export const LOWER_HEIGHT = 0.1;
export const UPPER_HEIGHT = 2;
/** Height of the wind that does not feel the single pixel, m. */
export const BLENDING_HEIGHT = 200;
