/** One way to explain a line's sales; candidates differ in these choices and are compared out of sample. */
export interface Specification {
  /** Regular price and depth with slopes of their own, instead of one price paid. */
  splitPrice: boolean;
  neighbourPrice: boolean;
  neighbourPromotion: boolean;
  attraction: boolean;
  around: boolean;
  fourierPairs: number;
  holidays: boolean;
  trend: boolean;
  /** Weeks after which a row counts half; Infinity = all alike. */
  halfLifeWeeks: number;
}

/** Short name of a specification as shown beside its score. */
export function nameSpecification(specification: Specification): string {
  const { splitPrice, neighbourPrice, neighbourPromotion, attraction, around, fourierPairs, holidays, trend } =
    specification;
  return [
    splitPrice ? 'regular price + cut' : 'price paid',
    ...(neighbourPrice ? ['neighbours’ price'] : []),
    ...(neighbourPromotion ? ['neighbours’ promotion'] : []),
    ...(attraction ? ['attraction'] : []),
    ...(around ? ['around promotions'] : []),
    ...(fourierPairs > 0 ? [`season ${fourierPairs}`] : []),
    ...(holidays ? ['holidays'] : []),
    ...(trend ? ['trend'] : []),
    Number.isFinite(specification.halfLifeWeeks) ? `half-life ${specification.halfLifeWeeks}` : 'no half-life',
  ].join(', ');
}
