/** Factor groups in which the why-drawer speaks of a column. */
export type ColumnGroup = 'price' | 'promotion' | 'around' | 'neighbours' | 'season' | 'holiday' | 'trend';

/** One explaining column of a line: a value per series and week of the axis. */
export interface Column {
  name: string;
  group: ColumnGroup;
  /** Whether items and locations get a slope of their own, shrunk to the line's. */
  hasOwnSlopes: boolean;
  /** Sign known from theory; 0 = unknown. */
  sign: -1 | 0 | 1;
  /** Prior standard deviation of the line's slope about 0, in ln units per unit of the column. */
  priorSpread: number;
  /** Indexed by series, then by week of the axis. Series may share one array. */
  values: readonly Float64Array[];
}
