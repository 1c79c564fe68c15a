/** One way to explain a line's sales; candidates differ in these choices and are compared out of sample. */
export interface Specification {
  /** Regular price and depth with slopes of their own, instead of one price paid. */
  splitPrice: boolean;
  /** An advertised price works differently from an unadvertised one: feature or display × ln price. */
  advertisedPrice: boolean;
  neighbourPrice: boolean;
  neighbourPromotion: boolean;
  attraction: boolean;
  around: boolean;
  /** An advertised price that has just fallen sells more than one that has lasted. */
  freshCut: boolean;
  fourierPairs: number;
  holidays: boolean;
  trend: boolean;
  /** Weeks after which a row counts half; Infinity = all alike. */
  halfLifeWeeks: number;
  /** Factor on the estimated variances of item and location deviations; below 1 they are drawn harder to the line. */
  spread: number;
}

/** Short name of a specification as shown beside its score. */
export function nameSpecification(specification: Specification): string {
  const parts = [specification.splitPrice ? 'regular price and cut' : 'price paid'];
  if (specification.advertisedPrice) parts.push('advertised price');
  if (specification.neighbourPrice) parts.push('neighbours’ price');
  if (specification.neighbourPromotion) parts.push('neighbours’ promotion');
  if (specification.attraction) parts.push('attraction');
  if (specification.around) parts.push('around promotions');
  if (specification.freshCut) parts.push('fresh cut');
  if (specification.fourierPairs > 0) parts.push(`season ${specification.fourierPairs}`);
  if (specification.holidays) parts.push('holidays');
  if (specification.trend) parts.push('trend');
  if (Number.isFinite(specification.halfLifeWeeks)) parts.push(`half-life ${specification.halfLifeWeeks}`);
  if (specification.spread !== 1) parts.push(`spread ${specification.spread}`);
  return parts.join(', ');
}
