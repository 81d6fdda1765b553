import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { LocalStore } from '../../../shared/store/local-store.ts';
import { openStore, placeOf } from '../../../shared/store/open-store.ts';
import { PerStore } from '../../../shared/store/per-store.ts';
import { sharedS3 } from '../../../shared/store/s3/s3-access.ts';
import { S3Store } from '../../../shared/store/s3-store.ts';

describe('opening a store', () => {
  it('takes a folder for a folder and s3:// for object storage', () => {
    expect(openStore('out')).toBeInstanceOf(LocalStore);
    expect(openStore('/data/s3:bucket')).toBeInstanceOf(LocalStore);
    expect(openStore('s3://basin-store/2025/orrin/')).toBeInstanceOf(S3Store);
    expect(openStore('s3://basin-store/2025/orrin/').place).toBe('s3://basin-store/2025/orrin');
    expect(openStore('s3://basin-store').place).toBe('s3://basin-store');
  });

  it.each([
    'http://host/path',
    'file:///data',
    'S3://basin-store',
    's3://',
    's3://a',
    's3://Upper',
    's3://under_score',
    's3://-begins',
    's3://two..dots',
    's3://10.0.0.1/x',
    's3://basin-store/a//b',
    's3://basin-store/../b',
    's3://basin-store/a b',
    `s3://${'a'.repeat(64)}`,
  ])('refuses %s', (location) => {
    expect(() => openStore(location)).toThrow(expect.objectContaining({ code: 'STORE_LOCATION' }));
  });

  it('names an object as a user would', () => {
    expect(placeOf('out', 'report.html')).toBe(join('out', 'report.html'));
    expect(placeOf('s3://basin-store/p/', 'report.html')).toBe('s3://basin-store/p/report.html');
    expect(placeOf('s3://basin-store', 'report.html')).toBe('s3://basin-store/report.html');
  });

  it('gives all stores of a thread one S3 client', () => {
    expect(sharedS3()).toBe(sharedS3());
  });

  it('keeps the contexts of the last stores and lets the oldest go', () => {
    const released: string[] = [];
    const contexts = new PerStore(
      (store) => store.place,
      (place) => void released.push(place),
      2,
    );
    const first = contexts.of('s3://store-one');
    contexts.of('s3://store-two');
    expect(contexts.of('s3://store-one')).toBe(first);
    contexts.of('s3://store-three');
    expect(released).toEqual(['s3://store-two']);
  });
});
