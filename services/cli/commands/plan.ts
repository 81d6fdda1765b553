import { EXIT } from '../../../shared/contract/exit-codes.ts';
import type { Plan } from '../../../shared/contract/plan.ts';
import { publishedProducts } from '../../../shared/contract/products.ts';
import { loadBasin } from '../../coordinator/load-basin.ts';
import { makePlan } from '../../coordinator/make-plan.ts';
import type { BasinOptions } from '../program.ts';

/** Bytes that a pixel takes on disk, measured on the demo basin (compressed): prepared and flux tiles, products. */
const ARTEFACT_BYTES_PER_PIXEL = 26;
const PRODUCT_BYTES_PER_PIXEL = 1.6;

/** `basinloom plan`: reads metadata and prints what a run would do. */
export async function plan(file: string, options: BasinOptions): Promise<number> {
  const made = await makePlan(await loadBasin(file, options));
  process.stdout.write(options.log === 'json' ? `${JSON.stringify(made)}\n` : describe(made));
  return EXIT.ok;
}

function describe(plan: Plan): string {
  const { grid, tiles, passes, basin, periods, leftOut } = plan;
  const perDay = publishedProducts(basin.products, 'day').length;
  const perPeriod = publishedProducts(basin.products, 'period').length;
  const passTiles = passes.reduce((sum, pass) => sum + pass.tiles.length, 0);
  const dates = new Set(
    passes.map(({ pass }) => pass.date).filter((d) => d >= basin.period.from && d <= basin.period.to),
  );
  const dayTiles = passes.filter(({ pass }) => dates.has(pass.date)).reduce((sum, pass) => sum + pass.tiles.length, 0);
  const layers = dates.size * perDay + periods.length * perPeriod;
  const pixels = grid.rows * grid.columns;
  const tilePixels = passTiles * grid.tileSize ** 2;
  const disk =
    Math.min(tilePixels, passes.length * pixels) * ARTEFACT_BYTES_PER_PIXEL + layers * pixels * PRODUCT_BYTES_PER_PIXEL;
  const lines = [
    `${basin.region.name}, ${basin.period.from} to ${basin.period.to} by ${basin.period.step}, method ${basin.method.use.join(', ')}`,
    '',
    `grid       ${grid.columns} x ${grid.rows} pixels of ${grid.resolution} m, ${grid.crs.code}`,
    `tiles      ${tiles.length} of ${grid.tileSize} x ${grid.tileSize} touch the region`,
    `zones      ${plan.zones.length}`,
    `weather    ${new Set(plan.days.map(({ station }) => station.id)).size} stations`,
    `terrain    ${plan.terrain ? plan.terrain.file : `flat at ${basin.elevation} m`}`,
    '',
    'pass                             scenes  tiles  of region  cloud of scenes',
    ...passes.map(({ pass, tiles: touched }) => {
      const clouds = pass.scenes.flatMap(({ cloudCoverPct }) => cloudCoverPct ?? []);
      const cloud = clouds.length ? `${(clouds.reduce((a, b) => a + b, 0) / clouds.length).toFixed(0)} %` : 'unknown';
      const share = `${((100 * touched.length) / tiles.length).toFixed(0)} %`;
      return `${pass.id.padEnd(32)} ${String(pass.scenes.length).padStart(6)} ${String(touched.length).padStart(6)} ${share.padStart(10)}  ${cloud.padStart(15)}`;
    }),
    '',
    `jobs       ${plan.terrain ? tiles.length : 0} terrain, ${passTiles} prepare, ${passTiles} flux, ${dayTiles} day, ${periods.length * tiles.length} integrate, ${layers} mosaic`,
    `products   ${layers} files: ${dates.size} dates x ${perDay}, ${periods.length} periods x ${perPeriod}`,
    `disk       about ${(disk / 1e9).toFixed(1)} GB`,
  ];
  if (leftOut.length > 0) {
    lines.push('', 'left out', ...leftOut.map(({ kind, id, error }) => `  ${kind} ${id}: ${error.message}`));
  }
  return `${lines.join('\n')}\n`;
}
