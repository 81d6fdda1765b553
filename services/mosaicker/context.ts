import { ArtefactReader } from '../../shared/store/artefact-reader.ts';
import type { Store } from '../../shared/store/store.ts';

/** What the jobs of one mosaicker thread share. */
export class MosaickerContext extends ArtefactReader {
  /** Version that goes into product files. */
  readonly softwareVersion: string;

  constructor(store: Store, softwareVersion: string) {
    super(store);
    this.softwareVersion = softwareVersion;
  }
}
