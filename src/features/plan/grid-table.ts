import { columnSizingFeature, createColumnHelper, tableFeatures } from '@tanstack/react-table';
import type { ReactNode } from 'react';
import type { GridColumn } from './grid-columns.ts';
import type { RowFigures } from './line-figures.ts';

/** One row as the grid shows it. `lockedAt` by position of the planned week. */
export interface GridViewRow {
  key: string;
  /** In plain words, for reading aloud. */
  name: string;
  heading: ReactNode;
  isTotal: boolean;
  figures: RowFigures;
  lockedAt: readonly boolean[];
}

export const gridFeatures = tableFeatures({ columnSizingFeature });
const helper = createColumnHelper<typeof gridFeatures, GridViewRow>();

function valueOf({ figures }: GridViewRow, column: GridColumn): number | null {
  const value = column.kind === 'history' ? figures.history[column.index] : figures.plan[column.index];
  return value === undefined || value === null || Number.isNaN(value) ? null : value;
}

/** A column per week, as wide as `widths` says (px). */
export function buildTableColumns(columns: readonly GridColumn[], widths: readonly number[]) {
  return helper.columns(
    columns.map((column, index) =>
      helper.accessor((row) => valueOf(row, column), { id: column.weekStart, size: widths[index], minSize: 0 }),
    ),
  );
}
