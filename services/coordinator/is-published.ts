import type { MosaicJob } from '../../shared/contract/jobs.ts';
import type { MosaicRecord } from '../../shared/contract/mosaic-record.ts';
import { productKey, productMarkerKey } from '../../shared/contract/product-key.ts';
import { findJson } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';

/** True when the product file in the output folder is the one that this job would make. */
export async function isPublished({ product, when, outputKey }: MosaicJob, store: Store): Promise<boolean> {
  const marker = await store.get(productMarkerKey(product, when));
  if (!marker || Buffer.from(marker).toString('utf8') !== outputKey) return false;
  const record = await findJson<MosaicRecord>(store, outputKey);
  return record !== null && (await store.size(productKey(product, when))) === record.size;
}
