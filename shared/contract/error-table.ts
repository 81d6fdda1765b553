import { type ErrorEntry, entry } from './error-entry.ts';
import { HTTP_ERRORS } from './http-errors.ts';

export type { ErrorEntry };

/**
 * Every error the product can report, in one table. `BasinloomError` looks its class of exit code and its
 * retry rule up here; docs/reference/errors.md is generated from it.
 *
 * Codes are stable: a script may match them. `message` and `remedy` are templates; `{name}` is filled from
 * the parameters given to the constructor.
 */
export const ERROR_TABLE = {
  // the command line
  USAGE: entry(2, false, '{detail}', 'Run `basinloom --help` for the commands and their options.'),

  // the basin file
  BASIN_FILE_MISSING: entry(66, false, '{file}: no such basin file', 'Give the path of a basin.yaml.'),
  BASIN_FILE_SYNTAX: entry(
    78,
    false,
    '{file}:{line}: not valid YAML: {detail}',
    'Mend the line; YAML indents with spaces.',
  ),
  BASIN_FILE_KEY: entry(
    78,
    false,
    '{file}:{line}: unknown key "{key}"{suggestion}',
    'Remove or rename the key; `basinloom schema` lists all keys.',
  ),
  BASIN_FILE_VALUE: entry(
    78,
    false,
    '{file}:{line}: {key}: {detail}',
    'Change the value; `basinloom schema` lists what is allowed.',
  ),

  // region
  BOUNDARY_MISSING: entry(66, false, '{file}: boundary file not found', 'Check region.boundary in the basin file.'),
  BOUNDARY_INVALID: entry(
    65,
    false,
    '{file}: {place}: {detail}',
    'Supply RFC 7946 GeoJSON: WGS 84 longitude, latitude; closed rings.',
  ),
  BOUNDARY_CROSSES_ITSELF: entry(
    65,
    false,
    '{file}: {place}: the ring crosses itself near longitude {longitude}, latitude {latitude}',
    'Repair the polygon in a GIS (make it valid), then run again.',
  ),
  ZONES_INVALID: entry(
    65,
    false,
    '{file}: {place}: {detail}',
    'Every zone is a Polygon or MultiPolygon feature with the property named by region.zoneName.',
  ),
  CRS_UNKNOWN: entry(
    78,
    false,
    'grid.crs: {crs}: unknown coordinate reference system',
    'Use "equal-area" or an EPSG code of a projected system in metres, for example EPSG:3035.',
  ),
  CRS_NOT_METRIC: entry(
    78,
    false,
    'grid.crs: {crs}: not a projected system in metres',
    'Use "equal-area" or an EPSG code of a projected system in metres.',
  ),

  // rasters
  RASTER_MISSING: entry(
    66,
    false,
    '{file}: raster not found',
    'Check the path; deliver the file again if it was lost.',
  ),
  RASTER_TRUNCATED: entry(
    65,
    false,
    '{file}: {place}: the file ends before its data',
    'Download or copy the file again.',
  ),
  RASTER_CORRUPT: entry(65, false, '{file}: {place}: {detail}', 'Download or copy the file again.'),
  RASTER_UNSUPPORTED: entry(
    65,
    false,
    '{file}: {detail}',
    'Convert the file to a tiled GeoTIFF with deflate or zstd compression.',
  ),
  RASTER_NO_CRS: entry(
    65,
    false,
    '{file}: no usable coordinate reference system ({detail})',
    'Assign the right projection to the file, then run again.',
  ),
  RASTER_READ: entry(
    74,
    true,
    '{file}: cannot be read: {detail}',
    'Check the disk or the connection; the job is tried again.',
  ),

  // scenes
  SCENES_NONE: entry(
    66,
    false,
    '{path}: no scene found',
    'Point scenes[].path at a folder that holds scenes with their MTL metadata files.',
  ),
  SCENE_METADATA: entry(65, false, '{file}: {place}: {detail}', 'Deliver the scene again with its complete MTL file.'),
  SCENE_NO_THERMAL: entry(
    65,
    false,
    '{file}: the metadata carry no surface-temperature scaling ({place})',
    'Order the scene as Level-2 science product with surface temperature (L2SP); an L2SR scene has none.',
  ),
  SCENE_BAND_MISSING: entry(
    66,
    false,
    '{file}: band file missing (role {role} of scene {scene})',
    'Deliver the band file beside the MTL file.',
  ),
  SCENE_GRID_MISMATCH: entry(
    65,
    false,
    '{file}: grid differs from the other bands of scene {scene}: {detail}',
    'Deliver the scene again; all its bands share one grid and projection.',
  ),
  SCENE_SUPERSEDED: entry(
    65,
    false,
    'scene {scene} is replaced by the newer processing {by}',
    'Nothing to do; remove the old delivery to save disk.',
  ),
  SCENE_OUTSIDE: entry(
    65,
    false,
    'scene {scene} does not touch the region',
    'Remove the scene, or check the boundary and its coordinates.',
  ),

  // passes
  PASS_ALL_CLOUD: entry(
    65,
    false,
    'pass {pass}: no clear pixel in the region',
    'Nothing to do: the pass is left out and its dates are interpolated across.',
  ),
  PASS_NO_ANCHORS: entry(
    65,
    false,
    'pass {pass}: too few {role} anchor candidates ({found} of {needed})',
    'Widen method.anchors, allow borrowing, or leave the pass out.',
  ),
  PASS_SPARSE: entry(
    65,
    false,
    'pass {pass}: its cold anchors have a mean NDVI of {found}, below {needed}: no full cover to calibrate on',
    'Nothing to do if the pass may borrow; else widen the region, lower method.anchors.minColdNdvi with coldFraction, or leave the pass out.',
  ),
  PASS_MOVED_FAR: entry(
    65,
    false,
    'pass {pass}: the adjustment moved it by {moved}, {sigmas} times the uncertainty of its calibration',
    'Look at its anchors and overlaps; give it other anchors or leave it out if they are wrong.',
  ),
  PASS_CALIBRATION: entry(
    65,
    false,
    'pass {pass}: calibration failed: {detail}',
    'Look at the anchors in tables/anchors.csv; give the pass anchors by hand or leave it out.',
  ),
  PASS_NO_WEATHER: entry(
    65,
    false,
    'pass {pass}: no weather at the overpass ({detail})',
    'Fill the gap in the station file, or add a station that has the hours around the overpass.',
  ),

  // weather
  WEATHER_FILE: entry(
    65,
    false,
    '{file}:{line}: {detail}',
    'See docs/reference/weather.md for the columns and their units.',
  ),
  WEATHER_COLUMN: entry(
    65,
    false,
    '{file}: column "{column}" is missing{suggestion}',
    'See docs/reference/weather.md for the columns and their units.',
  ),
  WEATHER_NO_WIND: entry(
    65,
    false,
    '{file}: station {station} has no wind speed {when}',
    'Add wind_speed_m_s, or remove the station; wind is never guessed.',
  ),
  WEATHER_DAYS_MISSING: entry(
    65,
    false,
    'no station has reference evapotranspiration for {days}',
    'Complete the daily or hourly records of at least one station for every day of the period.',
  ),

  // the store, the engine, the run
  STORE_WRITE: entry(
    74,
    true,
    '{path}: cannot be written: {detail}',
    'Free disk space or mend the permissions; then run again, finished work is kept.',
  ),
  STORE_READ: entry(
    74,
    true,
    '{path}: cannot be read: {detail}',
    'Check the disk; delete the artefact to have it made again.',
  ),
  STORE_FULL: entry(
    74,
    true,
    '{path}: the disk is full: {detail}',
    'Free space; a run on the way waits for it, a stopped one goes on with the same command.',
  ),
  STORE_LOCATION: entry(78, false, 'store: {location}: {detail}', 'Give a folder, or s3://bucket/prefix.'),
  STORE_NO_BUCKET: entry(
    78,
    false,
    's3://{bucket}: there is no such bucket at this endpoint',
    'Create the bucket, or correct its name, AWS_ENDPOINT_URL_S3 or AWS_REGION.',
  ),
  STORE_DENIED: entry(
    78,
    false,
    '{path}: access denied: {detail}',
    'Set AWS_ACCESS_KEY_ID, AWS_SECRET_ACCESS_KEY and AWS_REGION (or a profile); the user needs to get, put, delete and list objects of the bucket.',
  ),
  ARTEFACT_CORRUPT: entry(70, true, '{key}: artefact is damaged: {detail}', 'Delete the artefact; it is made again.'),
  RUN_LOCKED: entry(
    75,
    true,
    '{path}: another run (process {pid}) works in this store',
    'Wait for it, or stop it, then run again.',
  ),
  RUN_NOT_FOUND: entry(
    66,
    false,
    '{path}: no run found',
    'Run `basinloom run basin.yaml` first, or give the folder of the output.',
  ),
  NOTHING_TO_DO: entry(
    65,
    false,
    'no usable pass in the period {from} to {to}{reasons}',
    'Add scenes of the period, or change period.from and period.to.',
  ),
  WORKER_LOST: entry(
    70,
    true,
    'a worker ended in the middle of job {job}: {detail}',
    'The job is tried again; if it keeps happening, report the job.',
  ),
  QUEUE_UNREACHABLE: entry(
    75,
    true,
    '{url}: Redis does not answer: {detail}',
    'Start Redis, or correct the address; the run goes on where it was.',
  ),
  QUEUE_UNSAFE: entry(78, false, '{url}: this Redis would lose jobs: {detail}', '{remedy}'),
  QUEUE_NO_WORKER: entry(
    75,
    true,
    'nobody takes jobs from the queue {queue}',
    'Start a {service} of this version: node services/{service}/main.ts; the run waits for it.',
  ),
  ENVIRONMENT: entry(
    78,
    false,
    'environment variable {name}: {detail}',
    'See docs/reference/services.md for the variables of each service.',
  ),
  SCHEDULE_INVALID: entry(
    78,
    false,
    'schedule {name}: {detail}',
    'See `basinloom schedule --help`; `basinloom schedule list` shows what there is.',
  ),
  CANCELLED: entry(130, true, 'stopped on request', 'Run the same command again: it goes on where it was.'),
  INTERNAL: entry(70, false, '{detail}', 'This is a defect of basinloom: please report it with the run folder.'),

  ...HTTP_ERRORS,
} as const satisfies Record<string, ErrorEntry>;

export type ErrorCode = keyof typeof ERROR_TABLE;
