import type { Column } from './column.ts';
import type { LinePanel, PanelSeries } from './line-panel.ts';

export const PRICE_PAID = 'price paid';

const PRICE_SPREAD = 3;
const PROMOTION_SPREAD = 1.5;

/**
 * What a series does itself: price and promotion.
 * With `splitPrice` the regular price and the depth of the cut are two columns with slopes of their own; else one column holds
 * the price paid. With `advertisedPrice` the price has a slope of its own where it's featured or displayed. Feature without display, display without feature and both are told apart where both occur in the line.
 */
export function buildOwnColumns(panel: LinePanel, splitPrice: boolean, advertisedPrice: boolean): Column[] {
  const columns: Column[] = [];
  const add = (
    name: string,
    group: Column['group'],
    sign: Column['sign'],
    priorSpread: number,
    valuesOf: (series: LinePanel['series'][number]) => Float64Array,
  ): void => {
    columns.push({ name, group, hasOwnSlopes: true, sign, priorSpread, values: panel.series.map(valuesOf) });
  };
  if (splitPrice) {
    add('regular price', 'price', -1, PRICE_SPREAD, (series) => series.lnRegular);
    add('price cut', 'promotion', -1, PRICE_SPREAD, (series) => series.lnDepth);
  } else {
    add(PRICE_PAID, 'price', -1, PRICE_SPREAD, (series) =>
      series.lnRegular.map((lnRegular, t) => lnRegular + series.lnDepth[t]!),
    );
  }
  const hasBoth = panel.series.some((series) => series.feature.some((share, t) => share > 0 && series.display[t]! > 0));
  if (hasBoth) {
    add('feature only', 'promotion', 1, PROMOTION_SPREAD, (series) =>
      series.feature.map((share, t) => share * (1 - series.display[t]!)),
    );
    add('display only', 'promotion', 1, PROMOTION_SPREAD, (series) =>
      series.display.map((share, t) => share * (1 - series.feature[t]!)),
    );
    add('feature and display', 'promotion', 1, PROMOTION_SPREAD, (series) =>
      series.feature.map((share, t) => share * series.display[t]!),
    );
  } else {
    add('feature', 'promotion', 1, PROMOTION_SPREAD, (series) => series.feature);
    add('display', 'promotion', 1, PROMOTION_SPREAD, (series) => series.display);
  }
  if (advertisedPrice) {
    add('advertised price', 'promotion', -1, PROMOTION_SPREAD, (series) => {
      const mean = meanPrice(panel, series);
      return series.feature.map(
        (share, t) => Math.max(share, series.display[t]!) * (series.lnRegular[t]! + series.lnDepth[t]! - mean),
      );
    });
  }
  panel.mechanicNames.forEach((name, m) => {
    add(name, 'promotion', 1, PROMOTION_SPREAD, (series) => series.mechanics[m]!);
  });
  return columns;
}

/** Mean ln price paid over the used weeks up to the origin. */
function meanPrice(panel: LinePanel, series: PanelSeries): number {
  let sum = 0;
  for (let t = 0; t < panel.pastWeeks; t++) if (series.isUsed[t]) sum += series.lnRegular[t]! + series.lnDepth[t]!;
  return series.usedWeeks > 0 ? sum / series.usedWeeks : 0;
}
