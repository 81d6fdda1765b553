/** Water that the bare surface layer can lose in all, and at the full rate, mm (FAO-56 table 19, loam). */
const TOTAL = 22;
const READILY = 9;

/**
 * ET fraction of bare soil on each day, from its reference ET and rain: the surface layer of FAO-56 (chapter 7, eqs
 * 74 and 77) with tall reference ET as the upper limit, dry at the start.
 */
export function bareSoilFractions(referenceEt: readonly number[], rain: readonly number[]): number[] {
  let depletion = TOTAL;
  return referenceEt.map((reference, day) => {
    depletion = Math.max(0, depletion - rain[day]);
    const fraction = depletion <= READILY ? 1 : Math.max(0, (TOTAL - depletion) / (TOTAL - READILY));
    depletion = Math.min(TOTAL, depletion + fraction * reference);
    return fraction;
  });
}
