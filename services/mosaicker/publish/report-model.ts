import { DAY_QUALITY_BITS, PERIOD_QUALITY_BITS, type QualityBit } from '../../../shared/contract/quality.ts';
import type { RunSummary } from '../../../shared/contract/run-summary.ts';
import { type BoundsRow, checkFluxOrder } from '../bounds-check.ts';
import type { MosaickerContext } from '../context.ts';
import type { LoadedLayer, Publication } from '../publish.ts';
import type {
  AdjustmentReport,
  ClosureCheck,
  DayQuality,
  PassReport,
  PeriodQuality,
  ReportModel,
  Source,
} from '../report/model.ts';
import type { SeamRow, ZoneRow } from '../tables.ts';
import { figures } from './figures.ts';
import { parameters } from './parameters.ts';
import { volumeBeforeAdjustment } from './zone-rows.ts';

export interface ReportTables {
  readonly zones: readonly ZoneRow[];
  readonly seams: readonly SeamRow[];
  readonly bounds: readonly BoundsRow[];
}

/** Everything that the report shows, from the summary of a run and the tables made of it. */
export async function buildReport(
  publication: Publication,
  tables: ReportTables,
  context: MosaickerContext,
): Promise<ReportModel> {
  const { plan, summary, layers, contentId } = publication;
  const { basin, grid } = plan;
  const { region, period, checks, method } = basin;
  const days = layers.filter(({ per }) => per === 'day');
  const periods = layers.filter(({ per }) => per === 'period');
  return {
    basin: region.name,
    from: period.from,
    to: period.to,
    status: summary.leftOut.some(({ gap }) => gap) ? 'complete-with-gaps' : 'complete',
    runId: contentId,
    method: method.use[0],
    grid: {
      crs: grid.crs.code,
      resolutionM: grid.resolution,
      rows: grid.rows,
      columns: grid.columns,
      tileSize: grid.tileSize,
      tiles: plan.tiles.length,
    },
    minCoverage: checks.minCoverage,
    seamLimit: checks.seamLimit,
    ...tables,
    periodMaps: await figures(publication, periods, ['et-period', 'et-ratio'], context),
    dayMaps: await figures(publication, days, ['et-day'], context),
    days: days.map(dayQuality),
    periods: periods.map((layer) => periodQuality(publication, layer, tables.zones)),
    passes: passReports(publication),
    adjustment: adjustmentReport(publication, periods, tables.zones),
    fluxOrders: days.map((layer) => checkFluxOrder(layer.when, statisticsOf(layer))).filter((order) => order !== null),
    closures: closures(publication, tables.zones),
    leftOut: summary.leftOut,
    failures: [],
    parameters: parameters(basin),
    sources: sources(publication),
    versions: [summary.software],
  };
}

function statisticsOf({ records }: LoadedLayer) {
  return Object.fromEntries(Object.entries(records).map(([product, { statistics }]) => [product, statistics]));
}

function bitCounts(bits: readonly number[], table: readonly QualityBit[]): Record<string, number> {
  return Object.fromEntries(table.map(({ bit, name }) => [name, bits[bit] ?? 0]));
}

function dayQuality({ when, passes, tally }: LoadedLayer): DayQuality {
  const { regionPixels, usable, bits } = tally.quality;
  return { date: when, passes, regionPixels, usable, bits: bitCounts(bits, DAY_QUALITY_BITS) };
}

function periodQuality({ plan }: Publication, layer: LoadedLayer, zones: readonly ZoneRow[]): PeriodQuality {
  const { regionPixels, usable, bits } = layer.tally.quality;
  const period = plan.periods.find(({ id }) => id === layer.when);
  const basin = zones.find((row) => row.period === layer.when && row.zone_kind === 'basin' && row.land_cover === 'all');
  const observations = layer.records.observations?.statistics;
  const gap = layer.records['longest-gap']?.statistics;
  return {
    period: layer.when,
    from: period?.from ?? '',
    to: period?.to ?? '',
    regionPixels,
    usable,
    observationsMean: basin?.observations_mean ?? Number.NaN,
    observationsMin: observations?.minimum ?? Number.NaN,
    observationsMax: observations?.maximum ?? Number.NaN,
    longestGapDaysMean: gap?.mean ?? Number.NaN,
    longestGapDaysMax: basin?.longest_gap_days_max ?? Number.NaN,
    bits: bitCounts(bits, PERIOD_QUALITY_BITS),
  };
}

function passReports({ plan, summary }: Publication): PassReport[] {
  return plan.passes.map(({ pass }): PassReport => {
    const calibration = summary.calibrations.find(({ passId }) => passId === pass.id);
    const evidence = summary.evidence.find(({ passId }) => passId === pass.id);
    const adjustment = summary.adjustments.find(({ passId }) => passId === pass.id);
    const setAside = summary.leftOut.find(({ kind, id }) => kind === 'pass' && id === pass.id);
    return {
      passId: pass.id,
      satellite: pass.satellite,
      date: pass.date,
      acquired: pass.acquired,
      scenes: pass.scenes.map(({ id }) => id),
      anchors: calibration?.anchors ?? [],
      ...(calibration && { slope: calibration.slope, zeroTemperature: calibration.zeroTemperature }),
      ...(calibration?.borrowedFrom && { borrowedFrom: calibration.borrowedFrom }),
      ...(setAside && { setAside: setAside.error.message }),
      ...(evidence?.hotCandidates !== undefined && { hotCandidates: evidence.hotCandidates }),
      ...(evidence?.coldCandidates !== undefined && { coldCandidates: evidence.coldCandidates }),
      ...(adjustment && { adjustment }),
      ...(evidence?.scatter.counts.some((count) => count > 0) && { scatter: evidence.scatter }),
    };
  });
}

function adjustmentReport(
  publication: Publication,
  periods: readonly LoadedLayer[],
  zones: readonly ZoneRow[],
): AdjustmentReport | null {
  const { plan, summary } = publication;
  if (!plan.basin.method.adjust.use || summary.residuals.length === 0) return null;
  const used = summary.residuals.filter(({ cut }) => cut === undefined);
  const rms = (value: (residual: RunSummary['residuals'][number]) => number) => {
    const pixels = used.reduce((sum, residual) => sum + residual.pixels, 0);
    return Math.sqrt(used.reduce((sum, residual) => sum + residual.pixels * value(residual) ** 2, 0) / pixels);
  };
  const after = (id: string) =>
    zones.find((row) => row.period === id && row.zone_kind === 'basin' && row.land_cover === 'all')?.et_volume_m3;
  return {
    parameters: plan.basin.method.adjust.parameters,
    overlaps: summary.residuals,
    rmsBefore: rms(({ before }) => before),
    rmsAfter: rms(({ after: value }) => value),
    totals: periods.map((layer) => ({
      period: layer.when,
      before: volumeBeforeAdjustment(plan, layer),
      after: after(layer.when) ?? Number.NaN,
    })),
  };
}

/** Sums that must close: zones against the basin, where zones tile it. */
function closures({ plan, layers }: Publication, zones: readonly ZoneRow[]): ClosureCheck[] {
  if (plan.zones.length === 0) return [];
  return layers
    .filter(({ per }) => per === 'period')
    .flatMap(({ when }) => {
      const rows = zones.filter((row) => row.period === when && row.land_cover === 'all');
      const whole = rows.find((row) => row.zone_kind === 'basin');
      if (!whole) return [];
      const parts = rows.filter((row) => row.zone_kind === 'sub-basin').reduce((sum, row) => sum + row.et_volume_m3, 0);
      const found = Math.abs(parts - whole.et_volume_m3) / whole.et_volume_m3;
      return [
        {
          name: `Zone volumes of ${when}`,
          meaning:
            'Difference between the sum over the zones and the basin, relative to the basin; zones that do not tile the basin do not close',
          found,
          limit: 1e-9,
          unit: '1',
          within: found <= 1e-9,
        },
      ];
    });
}

function sources({ plan }: Publication): Source[] {
  const { basin, terrain, landcover } = plan;
  const scenes = plan.passes.flatMap(({ pass }) => pass.scenes);
  const base = (path: string) => path.slice(path.lastIndexOf('/') + 1);
  return [
    ...scenes.map((scene): Source => ({ kind: 'scene', name: scene.id, detail: scene.acquired })),
    ...basin.weather.map(({ path }): Source => ({ kind: 'weather', name: base(path) })),
    ...(terrain ? [{ kind: 'terrain', name: base(terrain.file) } as const] : []),
    ...(landcover ? [{ kind: 'land cover', name: base(landcover.file) } as const] : []),
    { kind: 'boundary', name: base(basin.region.boundary) },
    ...(basin.region.zones ? [{ kind: 'zones', name: base(basin.region.zones) } as const] : []),
  ];
}
