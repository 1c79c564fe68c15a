import { invertLower } from './cholesky.ts';
import type { SlopeSolution } from './shrunken-slopes.ts';
import type { SlopeLayout } from './slope-layout.ts';

/** Prior weight, in items, of the variance that a deviation starts from. */
const PRIOR_ITEMS = 2;

/**
 * The line's slope has this many times its column's prior spread: with the spread itself four items' price slope was drawn to 0 by 0.03
 * of −2 (400 generated lines).
 */
const LINE_SPREAD = 2;

/** Variance of the items' and of the locations' deviations per column, and how strongly correlated evidence is discounted. */
export interface VarianceComponents {
  item: Float64Array;
  location: Float64Array;
  /** Variance of the line's own slope about 0; estimated for shared groups such as holidays. */
  line: Float64Array;
  itemDesignEffect: number;
  locationDesignEffect: number;
  lineDesignEffect: number;
}

export function startVarianceComponents(layout: SlopeLayout): VarianceComponents {
  const { columns } = layout;
  return {
    item: Float64Array.from(columns, (column) => startingVariance(column.priorSpread)),
    location: Float64Array.from(columns, (column) => startingVariance(column.priorSpread) / 4),
    line: Float64Array.from(
      columns,
      (column) => (column.hasOwnSlopes ? LINE_SPREAD * column.priorSpread : column.priorSpread) ** 2,
    ),
    itemDesignEffect: 1,
    locationDesignEffect: 1,
    lineDesignEffect: 1,
  };
}

function startingVariance(priorSpread: number): number {
  return (priorSpread / 4) ** 2;
}

/** Ridge penalties λ = design effect ÷ variance, per coefficient; `spread` is a factor on the deviations' variances. */
export function penaltiesOf(layout: SlopeLayout, components: VarianceComponents, spread = 1): Float64Array {
  return Float64Array.from(layout.columnOf, (column, p) => {
    const level = layout.levelOf[p];
    if (level === 1) return components.itemDesignEffect / (spread * components.item[column]!);
    if (level === 2) return components.locationDesignEffect / (spread * components.location[column]!);
    return components.lineDesignEffect / components.line[column]!;
  });
}

/**
 * One expectation–maximisation step towards the restricted maximum likelihood of the deviations' variances (Dempster, Laird &
 * Rubin 1977): the mean of squared estimate plus its own variance, the latter inflated by the design effect, with a weak prior so
 * that few items can't make a variance vanish.
 */
export function improveVarianceComponents(
  layout: SlopeLayout,
  solution: SlopeSolution,
  components: VarianceComponents,
): VarianceComponents {
  const { size, columns } = layout;
  const inverse = invertLower(solution.factor, size);
  const sums = { item: new Float64Array(columns.length), location: new Float64Array(columns.length) };
  const counts = { item: new Float64Array(columns.length), location: new Float64Array(columns.length) };
  for (let p = columns.length; p < size; p++) {
    let variance = 0;
    for (let i = p; i < size; i++) variance += inverse[i * size + p]! ** 2;
    const isItem = layout.levelOf[p] === 1;
    const effect = isItem ? components.itemDesignEffect : components.locationDesignEffect;
    const level = isItem ? 'item' : 'location';
    const k = layout.columnOf[p]!;
    sums[level][k]! += solution.coefficients[p]! ** 2 + effect * variance;
    counts[level][k]!++;
  }
  const improve = (level: 'item' | 'location', share: number): Float64Array =>
    Float64Array.from(columns, (column, k) => {
      const prior = startingVariance(column.priorSpread) / share;
      return (sums[level][k]! + PRIOR_ITEMS * prior) / (counts[level][k]! + PRIOR_ITEMS);
    });
  return { ...components, item: improve('item', 1), location: improve('location', 4) };
}
