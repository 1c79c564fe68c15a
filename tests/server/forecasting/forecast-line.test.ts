import { describe, expect, it } from 'vitest';
import { forecastLine } from '../../../server/forecasting/forecast-line.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import { FIRST_WEEK, generateLine, plannedWeek, soldWeek } from './canonical-line.ts';

describe('forecastLine', () => {
  it('answers a price cut and a feature as the sales were made to', () => {
    const input = generateLine({ items: 6, weeks: 156 });
    const unitsAt = (price: number, feature: number): number =>
      forecastLine({
        ...input,
        series: input.series.map((series, s) => ({
          ...series,
          planned: series.planned.map((week) =>
            s === 0 ? { ...week, price, feature } : { ...week, price: 2, feature: 0 },
          ),
        })),
      }).series[0]!.mean[0]!;
    expect(Math.abs(unitsAt(1.6, 0) / unitsAt(2, 0) / 0.8 ** -2 - 1)).toBeLessThan(0.12);
    expect(Math.abs(unitsAt(1.6, 1) / unitsAt(1.6, 0) / Math.exp(0.5) - 1)).toBeLessThan(0.12);
  });

  it('gives the same forecast twice', () => {
    const input = generateLine({ items: 3, locations: 2 });
    expect(forecastLine(input)).toEqual(forecastLine(input));
  });

  it('keeps the order of the ranges and of mean over 0 in every week', () => {
    const { series, totals } = forecastLine(generateLine({ missing: 0.2 }));
    for (const one of [...series, ...totals]) {
      for (let h = 0; h < 8; h++) {
        expect(one.p2_5[h]).toBeLessThanOrEqual(one.p10[h]!);
        expect(one.p10[h]).toBeLessThanOrEqual(one.p50[h]!);
        expect(one.p50[h]).toBeLessThanOrEqual(one.p90[h]!);
        expect(one.p90[h]).toBeLessThanOrEqual(one.p97_5[h]!);
        expect(one.mean[h]).toBeGreaterThan(0);
      }
    }
  });

  it('has parts that add up to ln of the median', () => {
    const { series } = forecastLine(generateLine());
    for (const { parts, p50 } of series) {
      for (let h = 0; h < 8; h++) {
        const sum = Object.values(parts).reduce((total, part) => total + part[h]!, 0);
        expect(sum).toBeCloseTo(Math.log(p50[h]!), 10);
      }
    }
  });

  it('has parts of which those without promotions add up to ln of the base, but for one factor from median to mean', () => {
    const basic = ['level', 'price', 'season', 'holiday', 'trend', 'recent level'];
    const { series } = forecastLine(generateLine({ locations: 2 }));
    const factors = series.flatMap(({ parts, base }) =>
      [...base].map((units, h) => Math.log(units) - basic.reduce((sum, name) => sum + parts[name]![h]!, 0)),
    );
    for (const factor of factors) expect(factor).toBeCloseTo(factors[0]!, 10);
    const uplifts = series.flatMap(({ base, mean }) => [...mean].map((units, h) => units / base[h]!));
    expect(Math.max(...uplifts)).toBeGreaterThan(1.2);
  });

  it('has a base equal to the mean where nothing of the line is promoted', () => {
    const input = generateLine();
    const quiet = {
      ...input,
      series: input.series.map((series) => ({
        ...series,
        planned: series.planned.map((week) => ({ ...week, price: 2, feature: 0 })),
      })),
    };
    for (const { base, mean } of forecastLine(quiet).series) {
      for (let h = 0; h < 8; h++) expect(base[h]).toBeCloseTo(mean[h]!, 6);
    }
  });

  it('forecasts 0 outside the listing and says so', () => {
    const input = generateLine();
    const first = input.series[0]!;
    const until = addWeeks(input.origin, 3);
    const { series, totals } = forecastLine({
      ...input,
      series: [{ ...first, listedTo: until }, ...input.series.slice(1)],
    });
    expect([...series[0]!.mean].map((value) => value > 0)).toEqual([
      true,
      true,
      true,
      false,
      false,
      false,
      false,
      false,
    ]);
    expect(series[0]!.p97_5[4]).toBe(0);
    expect(series[0]!.marks[4]).toEqual(['outside-listing']);
    const ofItem = totals.find((total) => total.scope === 'item' && total.of === first.item)!;
    expect(ofItem.mean[5]).toBe(0);
  });

  it('calls a series that is never listed again not-listed', () => {
    const input = generateLine();
    const { series } = forecastLine({
      ...input,
      series: input.series.map((one, s) => (s === 0 ? { ...one, listedTo: input.origin } : one)),
    });
    expect(series[0]!.method).toBe('not-listed');
  });

  it('gives a line with five weeks of history a simple average and says so', () => {
    const { series, fit, findings } = forecastLine(generateLine({ weeks: 5 }));
    expect(fit).toBeNull();
    expect(series.map((one) => one.method)).toEqual(Array(4).fill('simple-average'));
    expect(findings.map((finding) => finding.kind)).toContain('line-too-thin');
  });

  it('lets a young series of an old line have its average and lists it', () => {
    const input = generateLine();
    const young = { ...input.series[0]!, sold: input.series[0]!.sold.slice(-3) };
    const { series, findings } = forecastLine({ ...input, series: [young, ...input.series.slice(1)] });
    expect(series[0]!.method).toBe('simple-average');
    expect(series[0]!.mean[0]).toBeCloseTo(young.sold.reduce((sum, week) => sum + week.units, 0) / 3, 8);
    expect(findings).toContainEqual(expect.objectContaining({ kind: 'series-too-thin', item: 'item-0' }));
  });

  it('holds a price that was never seen at the edge of what was, and marks the cell', () => {
    const input = generateLine({ items: 1 });
    const only = input.series[0]!;
    const lowest = Math.min(...only.sold.map((week) => week.price));
    const forecastAt = (price: number): ReturnType<typeof forecastLine>['series'][number] =>
      forecastLine({
        ...input,
        series: [{ ...only, planned: only.planned.map((week) => ({ ...week, price, feature: 0 })) }],
      }).series[0]!;
    const atEdge = forecastAt(lowest);
    const beyond = forecastAt(lowest / 3);
    expect(beyond.mean[0]).toBeCloseTo(atEdge.mean[0]!, 6);
    expect(beyond.marks[0]).toContain('outside-seen-price');
    expect(atEdge.marks[0]).toEqual([]);
  });

  it('names columns that never moved and still forecasts', () => {
    const sold = Array.from({ length: 60 }, (_, t) => soldWeek(t, { units: 90 + ((t * 7) % 20) }));
    const planned = [plannedWeek(60), plannedWeek(61)];
    const { series, findings } = forecastLine({
      line: 'still',
      series: [{ item: 'a', location: 'All', unitStep: 1, sold, planned, listedFrom: null, listedTo: null }],
      holidays: [],
      origin: addWeeks(FIRST_WEEK, 59),
      horizon: 2,
      seed: 1,
    });
    expect(findings.map((finding) => finding.kind)).toEqual(
      expect.arrayContaining(['column-never-moved', 'column-never-happened']),
    );
    expect(series[0]!.mean[0]).toBeGreaterThan(85);
    expect(series[0]!.mean[0]).toBeLessThan(115);
  });

  it('leaves weeks with a large gap and negative weeks out, and lists them', () => {
    const clean = generateLine({ items: 2 });
    const spoil = (input: typeof clean): typeof clean => ({
      ...input,
      series: input.series.map((series) => ({
        ...series,
        sold: series.sold.map((week, t) =>
          t === 50 ? { ...week, units: 1, gap: 0.6 } : t === 60 ? { ...week, units: -4 } : week,
        ),
      })),
    });
    const without = {
      ...clean,
      series: clean.series.map((series) => ({ ...series, sold: series.sold.filter((_, t) => t !== 50 && t !== 60) })),
    };
    const spoilt = forecastLine(spoil(clean));
    expect(spoilt.findings.filter((finding) => finding.kind === 'gap-week-left-out')).toHaveLength(2);
    expect(spoilt.findings.filter((finding) => finding.kind === 'negative-week-left-out')).toHaveLength(2);
    const reference = forecastLine(without);
    spoilt.series.forEach((series, s) => {
      for (let h = 0; h < 8; h++) expect(series.mean[h]! / reference.series[s]!.mean[h]!).toBeCloseTo(1, 1);
    });
  });

  it('estimates a line with listed zeros by Poisson pseudo-likelihood near its true mean', () => {
    const input = generateLine({ items: 5, baseUnits: 3, noise: 0.1, weeks: 156 });
    const zeros = {
      ...input,
      series: input.series.map((series) => ({
        ...series,
        sold: series.sold.map((week, t) => (t % 9 === 0 ? { ...week, units: 0 } : week)),
      })),
    };
    const { series } = forecastLine(zeros);
    expect(series.every((one) => one.method === 'poisson')).toBe(true);
    series.forEach((one, s) => {
      const sold = zeros.series[s]!.sold.map((week) => week.units);
      const mean = sold.reduce((sum, value) => sum + value, 0) / sold.length;
      for (const value of one.base) expect(Math.abs(value / mean - 1)).toBeLessThan(0.5);
    });
  });

  it('forecasts a rarely sold series by the method made for it and says so', () => {
    const input = generateLine({ items: 3 });
    const rare = {
      ...input.series[0]!,
      sold: input.series[0]!.sold.map((week, t) => ({ ...week, units: t % 3 === 0 ? 6 : 0, feature: 0 })),
    };
    const { series, findings } = forecastLine({ ...input, series: [rare, ...input.series.slice(1)] });
    expect(series[0]!.method).toBe('intermittent');
    expect(series[1]!.method).toBe('regression');
    expect(series[0]!.mean[0]).toBeGreaterThan(1.2);
    expect(series[0]!.mean[0]).toBeLessThan(2.8);
    expect(findings).toContainEqual(expect.objectContaining({ kind: 'series-intermittent', item: 'item-0' }));
  });

  it('refuses an empty line and an empty horizon', () => {
    const input = generateLine();
    expect(() => forecastLine({ ...input, series: [] })).toThrow(RangeError);
    expect(() => forecastLine({ ...input, horizon: 0 })).toThrow(RangeError);
  });
});
