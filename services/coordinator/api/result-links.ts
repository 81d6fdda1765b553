import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Store } from '../../../shared/store/store.ts';
import { isUrl } from '../load-basin.ts';
import type { Link, Results } from './schemas.ts';

const GEOTIFF = 'image/tiff; application=geotiff; profile=cloud-optimized';

/** Links to what a run has published, by the names of the outputs. Only what is in the store is named. */
export async function linksOfResults(run: string, location: string, store: Store): Promise<Results> {
  const keys = new Set([
    ...(await store.list('products/')),
    ...(await store.list('tables/')),
    ...(await store.list(`runs/${run}/`)),
    ...((await store.has('report.html')) ? ['report.html'] : []),
  ]);
  const linkTo = (key: string, type: string): Link => ({ href: addressIn(location, key), type, title: key });
  const one = (name: string, key: string, type: string): Results =>
    keys.has(key) ? { [name]: linkTo(key, type) } : {};
  const all = (folder: string, ending: string, type: string) =>
    [...keys].filter((key) => key.startsWith(folder) && key.endsWith(ending)).map((key) => linkTo(key, type));
  return {
    ...one('report', 'report.html', 'text/html'),
    ...one('collection', 'products/collection.json', 'application/json'),
    products: all('products/', '.tif', GEOTIFF),
    tables: all('tables/', '.csv', 'text/csv'),
    ...one('failures', `runs/${run}/failures.json`, 'application/json'),
    ...one('lineage', `runs/${run}/lineage.json`, 'application/json'),
  };
}

/** @param location of the store: a folder, or s3://bucket/prefix */
function addressIn(location: string, key: string): string {
  return isUrl(location) ? `${location.replace(/\/+$/, '')}/${key}` : pathToFileURL(join(location, key)).href;
}
