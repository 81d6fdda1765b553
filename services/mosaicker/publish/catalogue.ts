import { relative } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Plan } from '../../../shared/contract/plan.ts';
import type { ProductName } from '../../../shared/contract/products.ts';
import { isS3 } from '../../../shared/store/open-store.ts';
import type { Store } from '../../../shared/store/store.ts';
import type { LoadedLayer, Publication } from '../publish.ts';
import { overpassTime, type ProcessingFacts, periodTime, stacCollection, stacItem, stacText } from '../stac.ts';

/** Writes products/collection.json and products/<when>/item.json. */
export async function publishCatalogue(publication: Publication, store: Store): Promise<void> {
  const { plan, summary, layers } = publication;
  const collectionId = `${slug(plan.basin.region.name)}-evapotranspiration`;
  const software = { [summary.software.name]: summary.software.version };
  for (const layer of layers) {
    const item = stacItem({
      id: layer.when,
      title: titleOf(publication, layer),
      collectionId,
      grid: plan.grid,
      time: timeOf(publication, layer),
      assets: Object.values(layer.records).map(({ product, size, sha256, statistics }) => ({
        product,
        size,
        sha256,
        statistics,
      })),
      scenes: scenesOf(publication, layer, store),
      processing: { software, lineage: lineage(publication, layer) },
    });
    await store.put(`products/${layer.when}/item.json`, Buffer.from(stacText(item)));
  }
  const offset = plan.solarOffsetHours;
  const whole = periodTime({ id: 'all', from: plan.basin.period.from, to: plan.basin.period.to }, offset);
  const collection = stacCollection({
    id: collectionId,
    title: `${plan.basin.region.name}: evapotranspiration`,
    description: 'Actual evapotranspiration and its quality, by overpass date and accounting period.',
    grid: plan.grid,
    interval: 'start' in whole ? [whole.start, whole.end] : [whole.datetime, whole.datetime],
    items: layers.map((layer) => ({ id: layer.when, title: titleOf(publication, layer) })),
    products: [...new Set(layers.flatMap(({ records }) => Object.keys(records) as ProductName[]))],
    software,
  });
  await store.put('products/collection.json', Buffer.from(stacText(collection)));
}

function titleOf({ plan }: Publication, { when, per }: LoadedLayer): string {
  return `${plan.basin.region.name}, ${per === 'day' ? 'overpass of' : 'period'} ${when}`;
}

function passesOf({ passes }: Plan, layer: LoadedLayer) {
  return passes.map(({ pass }) => pass).filter(({ id }) => layer.passes.includes(id));
}

function timeOf({ plan }: Publication, layer: LoadedLayer) {
  if (layer.per === 'day') {
    return overpassTime(passesOf(plan, layer).map(({ acquired }) => acquired));
  }
  const period = plan.periods.find(({ id }) => id === layer.when);
  if (!period) throw new Error(`no period ${layer.when} in the plan`);
  return periodTime(period, plan.solarOffsetHours);
}

function scenesOf({ plan }: Publication, layer: LoadedLayer, store: Store) {
  const scenes = passesOf(plan, layer).flatMap((pass) => pass.scenes);
  return scenes.map(({ id, metadataFile }) => ({
    id,
    href: hrefOf(metadataFile, layer.when, store),
  }));
}

/** Relative where item and scene are in one file system, so that both can be moved together; else a file URL. */
function hrefOf(file: string, when: string, { place }: Store): string {
  if (isS3(place)) return pathToFileURL(file).href;
  return relative(`${place}/products/${when}`, file).replaceAll('\\', '/');
}

function lineage({ plan, summary }: Publication, layer: LoadedLayer): ProcessingFacts['lineage'] {
  const method = plan.basin.method.use[0].toUpperCase();
  const adjusted = summary.adjustments.filter(({ passId, links }) => links > 0 && layer.passes.includes(passId)).length;
  const steps = [
    `Surface energy balance by ${method}, one calibration for each overpass from anchors chosen over the whole pass.`,
    `Passes: ${layer.passes.join(', ') || 'none'}; ${adjusted} adjusted jointly in their overlaps.`,
  ];
  if (layer.per === 'period') {
    steps.push('Day fraction interpolated linearly between overpasses, times daily tall reference ET (ASCE).');
  }
  return steps.join(' ');
}

function slug(name: string): string {
  return (
    name
      .normalize('NFKD')
      .toLowerCase()
      .replace(/[^a-z0-9]+/g, '-')
      .replace(/^-+|-+$/g, '') || 'basin'
  );
}
