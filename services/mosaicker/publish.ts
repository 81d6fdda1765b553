import { createHash } from 'node:crypto';
import type { PublishJob } from '../../shared/contract/jobs.ts';
import type { MosaicRecord } from '../../shared/contract/mosaic-record.ts';
import type { Plan } from '../../shared/contract/plan.ts';
import type { ProductName } from '../../shared/contract/products.ts';
import type { PublishedLayer, RunSummary } from '../../shared/contract/run-summary.ts';
import { checkBounds } from './bounds-check.ts';
import type { MosaickerContext } from './context.ts';
import { publishCatalogue } from './publish/catalogue.ts';
import { buildReport } from './publish/report-model.ts';
import { seamRows } from './publish/seam-rows.ts';
import { zoneRows } from './publish/zone-rows.ts';
import { renderReport } from './report/render.ts';
import { adjustmentsCsv, anchorRows, anchorsCsv, boundsCsv, overlapsCsv, seamsCsv, zonesCsv } from './tables.ts';
import type { TallyRecord } from './tally.ts';

/** One layer with all that publishing reads of it. */
export interface LoadedLayer extends PublishedLayer {
  readonly tally: TallyRecord;
  readonly records: Partial<Record<ProductName, MosaicRecord>>;
}

/** What the writers of tables, catalogue and report share. */
export interface Publication {
  readonly plan: Plan;
  readonly summary: RunSummary;
  readonly layers: readonly LoadedLayer[];
  /** Short name of the run's content: the same inputs give the same. */
  readonly contentId: string;
}

/** Writes tables, STAC catalogue and report from the summary of a run. Reads no clock. */
export async function runPublish(job: PublishJob, context: MosaickerContext): Promise<void> {
  const publication = await load(job, context);
  const { plan, summary, layers } = publication;
  const zones = zoneRows(publication);
  const seams = seamRows(publication);
  const bounds = layers.flatMap(({ when, records }) =>
    Object.values(records).flatMap(({ product, statistics }) => checkBounds(product, statistics, when)),
  );
  const tables: Readonly<Record<string, string>> = {
    zones: zonesCsv(zones),
    seams: seamsCsv(seams),
    anchors: anchorsCsv(summary.calibrations.flatMap((calibration) => anchorRows(calibration))),
    adjustments: adjustmentsCsv(summary.adjustments),
    overlaps: overlapsCsv(summary.residuals),
    bounds: boundsCsv(bounds),
  };
  for (const [name, text] of Object.entries(tables)) await context.store.put(`tables/${name}.csv`, Buffer.from(text));
  await publishCatalogue(publication, context.store);
  const model = await buildReport(publication, { zones, seams, bounds }, context);
  await context.store.put('report.html', Buffer.from(renderReport(model)));
  await context.store.put(
    job.outputKey,
    Buffer.from(JSON.stringify({ content: publication.contentId, plan: plan.version })),
  );
}

/** What the products rest on: no path and no clock, so that the same inputs have the same name everywhere. */
function contentOf({ software, calibrations, adjustments, layers }: RunSummary): unknown {
  return [software, calibrations, adjustments, layers];
}

async function load(job: PublishJob, context: MosaickerContext): Promise<Publication> {
  const plan = await context.plan(job.planKey);
  const summary = await context.json<RunSummary>(job.summaryKey);
  const layers: LoadedLayer[] = [];
  for (const layer of summary.layers) {
    const records: Partial<Record<ProductName, MosaicRecord>> = {};
    for (const [product, key] of Object.entries(layer.mosaics)) {
      records[product as ProductName] = await context.json<MosaicRecord>(key);
    }
    layers.push({ ...layer, tally: await context.json<TallyRecord>(layer.tallyKey), records });
  }
  const contentId = createHash('sha256')
    .update(JSON.stringify(contentOf(summary)))
    .digest('hex')
    .slice(0, 12);
  return { plan, summary, layers, contentId };
}
