import type { Finding } from '../types.ts';
import type { Column } from './column.ts';
import type { LinePanel } from './line-panel.ts';

const ALIAS_TOLERANCE = 1e-9;

/**
 * Leaves out what can't be estimated: columns that are zero or never move within any series, and columns that earlier ones
 * determine. Each is named in a finding.
 */
export function dropUnusableColumns(
  panel: LinePanel,
  columns: readonly Column[],
): { kept: Column[]; findings: Finding[] } {
  const findings: Finding[] = [];
  const candidates = columns.filter((column) => {
    const { isEmpty, hasMoved } = describe(panel, column);
    if (isEmpty) findings.push({ kind: 'column-never-happened', values: { column: column.name } });
    else if (!hasMoved) findings.push({ kind: 'column-never-moved', values: { column: column.name } });
    return hasMoved;
  });
  const isAliased = findAliased(panel, candidates);
  const kept = candidates.filter((column, k) => {
    if (isAliased[k]) findings.push({ kind: 'column-aliased', values: { column: column.name } });
    return !isAliased[k];
  });
  return { kept, findings };
}

function describe(panel: LinePanel, column: Column): { isEmpty: boolean; hasMoved: boolean } {
  let isEmpty = true;
  let hasMoved = false;
  panel.series.forEach((series, s) => {
    const values = column.values[s]!;
    let low = Infinity;
    let high = -Infinity;
    for (let t = 0; t < panel.pastWeeks; t++) {
      if (!series.isUsed[t]) continue;
      const value = values[t]!;
      if (Math.abs(value) > 1e-12) isEmpty = false;
      if (value < low) low = value;
      if (value > high) high = value;
    }
    if (high - low > 1e-6) hasMoved = true;
  });
  return { isEmpty, hasMoved };
}

/** Columns (of unit length, centred within series) whose distance from the span of the earlier ones is below the tolerance. */
function findAliased(panel: LinePanel, columns: readonly Column[]): boolean[] {
  const count = columns.length;
  const gram = new Float64Array(count * count);
  panel.series.forEach((series, s) => {
    const used: number[] = [];
    for (let t = 0; t < panel.pastWeeks; t++) if (series.isUsed[t]) used.push(t);
    if (used.length < 2) return;
    const centred = columns.map((column) => {
      const values = Float64Array.from(used, (t) => column.values[s]![t]!);
      const mean = values.reduce((sum, value) => sum + value, 0) / used.length;
      return values.map((value) => value - mean);
    });
    for (let k = 0; k < count; k++) {
      for (let l = 0; l <= k; l++) {
        let sum = 0;
        for (let i = 0; i < used.length; i++) sum += centred[k]![i]! * centred[l]![i]!;
        gram[k * count + l]! += sum;
      }
    }
  });
  const isAliased = new Array<boolean>(count).fill(false);
  const lower = new Float64Array(count * count);
  for (let k = 0; k < count; k++) {
    const scaleK = Math.sqrt(gram[k * count + k]!);
    let rest = 1;
    for (let l = 0; l < k; l++) {
      if (isAliased[l]) continue;
      let value = gram[k * count + l]! / (scaleK * Math.sqrt(gram[l * count + l]!));
      for (let m = 0; m < l; m++) value -= lower[k * count + m]! * lower[l * count + m]!;
      value /= lower[l * count + l]!;
      lower[k * count + l] = value;
      rest -= value * value;
    }
    if (rest < ALIAS_TOLERANCE) isAliased[k] = true;
    else lower[k * count + k] = Math.sqrt(rest);
  }
  return isAliased;
}
