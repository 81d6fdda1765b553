/** The range widened to whole steps of 1, 2 or 5 times a power of ten, about five steps in all. */
export function niceRange(low: number, high: number): readonly [number, number] {
  if (!(high > low)) return [low, low + 1];
  const step = niceStep(high - low, 5);
  return [tidy(Math.floor(low / step + 1e-9) * step), tidy(Math.ceil(high / step - 1e-9) * step)];
}

/** A step of 1, 2 or 5 times a power of ten that cuts a width into about `parts`. */
export function niceStep(width: number, parts: number): number {
  const rough = width / parts;
  const power = 10 ** Math.floor(Math.log10(rough));
  const lead = rough / power;
  return tidy((lead < 1.5 ? 1 : lead < 3.5 ? 2 : lead < 7.5 ? 5 : 10) * power);
}

/** Whole multiples of a nice step from `low` to `high`, both included. */
export function niceTicks(low: number, high: number, parts: number): readonly number[] {
  const step = niceStep(high - low, parts);
  const ticks: number[] = [];
  for (let i = Math.ceil(low / step - 1e-9); i * step <= high + step * 1e-9; i++) ticks.push(tidy(i * step));
  return ticks;
}

function tidy(value: number): number {
  return Number(value.toPrecision(12));
}
