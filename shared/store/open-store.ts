import { join } from 'node:path';
import { BasinloomError } from '../contract/errors.ts';
import { LocalStore } from './local-store.ts';
import { parseS3Location } from './s3/s3-location.ts';
import { S3Store } from './s3-store.ts';
import type { Store } from './store.ts';

/** True for a location in object storage, false for a folder. @throws BasinloomError STORE_LOCATION for another scheme */
export function isS3(location: string): boolean {
  const scheme = /^([A-Za-z][A-Za-z0-9+.-]*):\/\//.exec(location)?.[1];
  if (scheme !== undefined && scheme !== 's3') {
    throw new BasinloomError('STORE_LOCATION', { location, detail: `no store is known for "${scheme}://"` });
  }
  return scheme === 's3';
}

/**
 * The store of a location: a folder, or s3://bucket/prefix on the endpoint that the environment names. Nothing is
 * read or written yet.
 *
 * @throws BasinloomError STORE_LOCATION for another scheme or a wrong bucket name
 */
export function openStore(location: string): Store {
  return isS3(location) ? new S3Store(location) : new LocalStore(location);
}

/** Where an object of a store is, as a user names it. @throws BasinloomError STORE_LOCATION */
export function placeOf(location: string, key: string): string {
  return isS3(location) ? `${parseS3Location(location).place}/${key}` : join(location, key);
}
