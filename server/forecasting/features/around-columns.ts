import type { Column } from './column.ts';
import type { LinePanel } from './line-panel.ts';

/**
 * Depth of the own price cut, as a positive share of ln price, one and two weeks earlier (stocking up: a dip) and one week ahead
 * (waiting for an advertised cut). Signs: all three can only lower sales.
 */
export function buildAroundColumns(panel: LinePanel): Column[] {
  const shifts = [
    { name: 'cut one week earlier', weeks: -1 },
    { name: 'cut two weeks earlier', weeks: -2 },
    { name: 'cut one week ahead', weeks: 1 },
  ];
  return shifts.map(({ name, weeks }) => ({
    name,
    group: 'around',
    hasOwnSlopes: false,
    sign: -1,
    priorSpread: 1,
    values: panel.series.map((series) => series.lnDepth.map((_, t) => Math.max(0, -(series.lnDepth[t + weeks] ?? 0)))),
  }));
}

/** Fall of ln price since the week before where the new price is featured or displayed: the first week of a cut sells most. */
export function buildFreshCut(panel: LinePanel): Column {
  return {
    name: 'fresh advertised cut',
    group: 'promotion',
    hasOwnSlopes: true,
    sign: 1,
    priorSpread: 1,
    values: panel.series.map((series) => {
      const lnPrice = series.lnRegular.map((lnRegular, t) => lnRegular + series.lnDepth[t]!);
      return lnPrice.map((value, t) =>
        t === 0 ? 0 : Math.max(series.feature[t]!, series.display[t]!) * Math.max(0, lnPrice[t - 1]! - value),
      );
    }),
  };
}
