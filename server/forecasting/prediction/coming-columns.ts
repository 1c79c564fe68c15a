import type { Column } from '../features/column.ts';
import type { LinePanel } from '../features/line-panel.ts';
import { ATTRACTION, buildAttraction } from '../features/neighbour-columns.ts';
import { holdAtSeenRange } from '../features/seen-range.ts';
import { fitOwnParts, rebuildColumns, type LineModel } from '../fit/line-model.ts';
import type { Specification } from '../search/specification.ts';
import type { HolidayWeek } from '../types.ts';

/**
 * A model's columns on a panel of the same line (the plan, or the plan with promotions off), with coming prices and promotions held at
 * the edge of what was seen, and the neighbours' attraction built from parts held in the same way.
 */
export function prepareComingColumns(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  specification: Specification,
  model: LineModel,
): Column[] {
  const rebuilt = rebuildColumns(panel, holidays, specification, model.columns);
  const columns = holdAtSeenRange(panel, rebuilt);
  if (model.ownEstimate) {
    const ownColumns = model.ownEstimate.layout.columns;
    const own = ownColumns.map((column) => columns.find((one) => one.name === column.name) ?? column);
    const attraction = buildAttraction(panel, fitOwnParts(panel, own, model.ownEstimate));
    const at = columns.findIndex((column) => column.name === ATTRACTION);
    columns[at] = attraction;
  }
  return columns;
}
