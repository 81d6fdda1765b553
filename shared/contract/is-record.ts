/** True for an object of named values, as JSON and YAML have them: no list, not null. */
export function isRecord(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
