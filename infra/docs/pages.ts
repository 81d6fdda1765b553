import { basinFilePage } from './basin-file-page.ts';
import { errorsPage } from './errors-page.ts';
import { exitCodesPage } from './exit-codes-page.ts';
import { httpApiPage } from './http-api-page.ts';
import { productsPage } from './products-page.ts';
import { qualityBitsPage } from './quality-bits-page.ts';
import { servicesPage } from './services-page.ts';

/** The pages that are made from the contract, by their names under docs/reference. */
export const PAGES: Readonly<Record<string, () => string>> = {
  'basin-file.md': basinFilePage,
  'errors.md': errorsPage,
  'exit-codes.md': exitCodesPage,
  'http-api.md': httpApiPage,
  'products.md': productsPage,
  'quality-bits.md': qualityBitsPage,
  'services.md': servicesPage,
};
