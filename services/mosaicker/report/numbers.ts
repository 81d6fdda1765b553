/** Numbers, dates and shares as the report writes them: English, the same on every machine. */

const THIN_SPACE = '\u202f';
const MINUS = '\u2212';
/** What stands for a missing number. */
export const MISSING = '–';

const MONTHS = [
  'January',
  'February',
  'March',
  'April',
  'May',
  'June',
  'July',
  'August',
  'September',
  'October',
  'November',
  'December',
] as const;

/** A number with fixed decimals, groups of three, a true minus sign. */
export function number(value: number | undefined | null, decimals = 0): string {
  if (value === undefined || value === null || !Number.isFinite(value)) return MISSING;
  const [whole, part] = Math.abs(value).toFixed(decimals).split('.');
  const grouped = whole.replace(/\B(?=(\d{3})+$)/g, THIN_SPACE);
  const text = part ? `${grouped}.${part}` : grouped;
  return value < 0 && /[1-9]/.test(text) ? MINUS + text : text;
}

/** A value on an axis: with the decimals that it has, four at most. */
export function tickText(value: number): string {
  const decimals = (/\.(\d+)$/.exec(String(value))?.[1] ?? '').length;
  return number(value, Math.min(4, decimals));
}

/** A number with its sign, for differences and offsets. */
export function signed(value: number | undefined | null, decimals: number): string {
  const text = number(value, decimals);
  return value !== undefined && value !== null && value > 0 && /[1-9]/.test(text) ? `+${text}` : text;
}

/** A number with about `digits` significant digits, never in powers of ten. */
export function significant(value: number | undefined | null, digits = 3): string {
  if (value === undefined || value === null || !Number.isFinite(value)) return MISSING;
  if (value === 0) return '0';
  const magnitude = Math.floor(Math.log10(Math.abs(value)));
  const decimals = Math.max(0, Math.min(6, digits - 1 - magnitude));
  return number(value, decimals);
}

/** A share 0..1 in percent. Less than all never reads "100 %", more than nothing never "0 %". */
export function percent(share: number | undefined | null, decimals = 0): string {
  if (share === undefined || share === null || !Number.isFinite(share)) return MISSING;
  const step = 10 ** -decimals;
  if (share > 0 && share * 100 < step / 2) return `< ${number(step, decimals)}${THIN_SPACE}%`;
  if (share < 1 && share * 100 > 100 - step / 2) return `> ${number(100 - step, decimals)}${THIN_SPACE}%`;
  return `${number(share * 100, decimals)}${THIN_SPACE}%`;
}

/** A unit in UDUNITS spelling with raised exponents: "W m-2" as "W m⁻²". */
export function unitText(unit: string): string {
  return unit.replace(/-(\d)/g, (_, digit: string) => `⁻${'⁰¹²³⁴⁵⁶⁷⁸⁹'[Number(digit)]}`);
}

/** A volume given in m3, in millions of m3 where it is large. */
export function volume(cubicMetres: number): string {
  if (!Number.isFinite(cubicMetres)) return MISSING;
  const millions = cubicMetres / 1e6;
  return Math.abs(millions) >= 0.1 ? `${significant(millions)} million m³` : `${number(cubicMetres)} m³`;
}

/** "12 June 2025" */
export function day(isoDate: string): string {
  const [year, month, date] = isoDate.split('-').map(Number);
  return MONTHS[month - 1] && date ? `${date} ${MONTHS[month - 1]} ${year}` : isoDate;
}

/** "June 2025" for a month, "1 April 2025 to 30 September 2025" for other spans. */
export function periodName(period: { readonly period: string; readonly from: string; readonly to: string }): string {
  const month = /^(\d{4})-(\d{2})$/.exec(period.period);
  if (month && MONTHS[Number(month[2]) - 1]) return `${MONTHS[Number(month[2]) - 1]} ${month[1]}`;
  return `${day(period.from)} to ${day(period.to)}`;
}

/** "1 pass", "2 passes" */
export function counted(count: number, one: string, many = `${one}s`): string {
  return `${number(count)} ${count === 1 ? one : many}`;
}
