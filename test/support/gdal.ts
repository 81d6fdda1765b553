import { spawnSync } from 'node:child_process';

/** Debian's Python, which has GDAL's bindings when python3-gdal is installed. */
const PYTHON = '/usr/bin/python3';

/** True when GDAL can be asked from outside; tests that need it skip otherwise. */
export const hasGdal = spawnSync(PYTHON, ['-c', 'from osgeo import gdal, gdal_array']).status === 0;

/** Runs a Python script that prints one JSON value. */
export function gdalJson<T>(script: string, ...args: readonly string[]): T {
  const prelude = 'import sys, json\nfrom osgeo import gdal, osr\ngdal.UseExceptions()\n';
  const { status, signal, stdout, stderr } = spawnSync(PYTHON, ['-c', prelude + script, ...args], {
    encoding: 'utf8',
    maxBuffer: 1 << 28,
  });
  if (status !== 0) throw new Error(`GDAL script failed (${status ?? signal}): ${stderr}`);
  return JSON.parse(stdout) as T;
}

/** GDAL's full check of a Cloud Optimized GeoTIFF: the text that it prints, for a failing test to show. */
export function checkCog(file: string): { valid: boolean; text: string } {
  const args = ['-m', 'osgeo_utils.samples.validate_cloud_optimized_geotiff', '--full-check=yes', file];
  const { status, stdout, stderr } = spawnSync(PYTHON, args, { encoding: 'utf8' });
  return { valid: status === 0, text: `${stdout}${stderr}` };
}
