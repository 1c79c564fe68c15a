import { useTable } from '@tanstack/react-table';
import { defaultRangeExtractor, useVirtualizer, type Range } from '@tanstack/react-virtual';
import {
  useCallback,
  useEffect,
  useLayoutEffect,
  useMemo,
  useRef,
  useState,
  type ClipboardEvent,
  type KeyboardEvent,
  type MouseEvent,
} from 'react';
import { useTranslation } from 'react-i18next';
import type { CalendarHoliday } from '../../../../shared/contracts/calendar.ts';
import { formatNumber } from '../../../lib/format.ts';
import { columnWidth, monthRuns, placePennants, type GridColumn } from '../grid-columns.ts';
import { buildTableColumns, gridFeatures, type GridViewRow } from '../grid-table.ts';
import { isOneCell, moveSelection, rectangleOf, selectCell, type Selection } from '../selection.ts';
import { GridHead, headHeight } from './GridHead.tsx';
import { GridRowView, type EditState, type RowHandlers } from './GridRowView.tsx';
import '../plan-grid.css';

/** What may be done in the grid beside looking. Each says by itself what came of it. */
export interface GridEditor {
  /** Why nothing can be typed into the cell; null where it can. */
  refuse: (row: number, column: number) => string | null;
  /** Takes a typed text; false leaves the field open. */
  commit: (row: number, column: number, text: string) => boolean;
  textOf: (row: number, column: number) => string;
  clear: () => void;
  paste: (text: string) => void;
  undo: () => void;
  redo: () => void;
  save: () => void;
  notify: (sentence: string) => void;
}

export interface PlanGridProps {
  label: string;
  cornerLabel: string;
  nameWidth: number;
  /** The total is the last one and stays at the foot. */
  rows: GridViewRow[];
  columns: GridColumn[];
  promotions: readonly { name: string; firstWeek: string; lastWeek: string }[];
  holidays: readonly CalendarHoliday[];
  selection: Selection | null;
  onSelect: (selection: Selection) => void;
  copyText: (selection: Selection) => string;
  /** Null where the grid is only read. */
  editor: GridEditor | null;
  /** The editor only says why nothing can be changed. */
  isReadOnly?: boolean;
  onWhy?: () => void;
}

const rowHeight = 25;
const totalHeight = 28;
const seamGap = 10;

/** Positions in view and the one in focus, which stays drawn so that the keyboard keeps its place. */
const keepInRange = (index: number | null) => (range: Range) => {
  const shown = defaultRangeExtractor(range);
  if (index === null || index >= range.count || shown.includes(index)) return shown;
  return [...shown, index].sort((a, b) => a - b);
};

/**
 * Weeks across, rows down, both drawn only as far as they are in view; the first column, the head and the total stay. Works by mouse and by keyboard as
 * the WAI-ARIA grid pattern describes; Esc and then Tab leaves it.
 */
export function PlanGrid(props: PlanGridProps) {
  const { rows, columns, selection, onSelect, editor, onWhy, nameWidth } = props;
  const { t } = useTranslation('plan');
  const scroller = useRef<HTMLDivElement>(null);
  const isFocusWanted = useRef(false);
  const isLeaving = useRef(false);
  const isDragging = useRef(false);
  const [editing, setEditing] = useState<EditState | null>(null);

  const totalRow = rows.length - 1;
  const firstPlanned = Math.max(
    0,
    columns.findIndex((column) => column.kind === 'plan'),
  );
  const tabStop = selection?.active ?? { row: 0, column: firstPlanned };

  const widths = useMemo(
    () =>
      columns.map((column) => {
        const isHistory = column.kind === 'history';
        let largest = 0;
        let longest = '';
        for (const { figures } of rows) {
          const value = isHistory ? figures.history[column.index] : figures.plan[column.index];
          if (!value) continue;
          if (value > largest) largest = value;
          if (!Number.isInteger(value)) {
            const text = formatNumber(value);
            if (text.length > longest.length) longest = text;
          }
        }
        const whole = formatNumber(Math.floor(largest));
        return columnWidth(whole.length > longest.length ? whole : longest) + (column.isBeforeSeam ? seamGap : 0);
      }),
    [rows, columns],
  );

  const tableColumns = useMemo(() => buildTableColumns(columns, widths), [columns, widths]);
  const table = useTable({ features: gridFeatures, columns: tableColumns, data: rows, getRowId: (row) => row.key });
  const tableRows = table.getRowModel().rows;

  const { pennants, hidden } = useMemo(() => placePennants(props.promotions, columns, 3), [props.promotions, columns]);
  const lanes = pennants.reduce((most, { lane }) => Math.max(most, lane + 1), 0);
  const months = useMemo(() => monthRuns(columns), [columns]);
  const headSize = headHeight(lanes);

  const rowVirtualizer = useVirtualizer({
    count: Math.max(0, totalRow),
    getScrollElement: () => scroller.current,
    estimateSize: () => rowHeight,
    overscan: 8,
    paddingStart: headSize,
    scrollPaddingStart: headSize,
    scrollPaddingEnd: totalHeight + 2,
    rangeExtractor: keepInRange(tabStop.row < totalRow ? tabStop.row : null),
  });
  const columnVirtualizer = useVirtualizer({
    horizontal: true,
    count: columns.length,
    getScrollElement: () => scroller.current,
    estimateSize: (index) => widths[index] ?? 44,
    overscan: 4,
    paddingStart: nameWidth,
    scrollPaddingStart: nameWidth,
    rangeExtractor: keepInRange(tabStop.column),
  });
  useLayoutEffect(() => {
    columnVirtualizer.measure();
  }, [widths, nameWidth, columnVirtualizer]);
  useLayoutEffect(() => {
    rowVirtualizer.measure();
  }, [headSize, rowVirtualizer]);

  const lefts = useMemo(() => {
    let left = nameWidth;
    return widths.map((width) => {
      const at = left;
      left += width;
      return at;
    });
  }, [widths, nameWidth]);
  const innerWidth = (lefts.at(-1) ?? nameWidth) + (widths.at(-1) ?? 0);
  const bodyHeight = Math.max(0, totalRow) * rowHeight;
  const shownColumns = columnVirtualizer.getVirtualItems().map(({ index }) => index);
  const columnKey = shownColumns.join();
  // The list itself only changes when other columns come into view, so that rows needn't be drawn again on every scroll.
  // eslint-disable-next-line react-hooks/exhaustive-deps
  const visibleColumns = useMemo(() => shownColumns, [columnKey]);

  const rectangle = selection ? rectangleOf(selection) : null;
  const seamColumn = columns.findIndex((column) => column.isBeforeSeam);
  const seamLeft = seamColumn < 0 ? null : (lefts[seamColumn] ?? 0) + (widths[seamColumn] ?? 0) - seamGap / 2 - 1;

  const headRow = selection?.head.row;
  const headColumn = selection?.head.column;
  const activeRow = selection?.active.row;
  const activeColumn = selection?.active.column;
  useLayoutEffect(() => {
    // A click has its cell in sight already; scrolling under the mouse would drag the selection along.
    if (headRow === undefined || headColumn === undefined || !isFocusWanted.current || isDragging.current) return;
    if (headRow < totalRow) rowVirtualizer.scrollToIndex(headRow, { align: 'auto' });
    columnVirtualizer.scrollToIndex(headColumn, { align: 'auto' });
  }, [headRow, headColumn, totalRow, rowVirtualizer, columnVirtualizer]);
  useLayoutEffect(() => {
    if (!isFocusWanted.current || editing) return;
    scroller.current
      ?.querySelector<HTMLElement>(`[data-row="${activeRow}"][data-column="${activeColumn}"]`)
      ?.focus({ preventScroll: true });
  }, [activeRow, activeColumn, editing]);
  useEffect(() => {
    const stop = () => {
      isDragging.current = false;
    };
    window.addEventListener('mouseup', stop);
    return () => window.removeEventListener('mouseup', stop);
  }, []);

  const select = useCallback(
    (next: Selection) => {
      isFocusWanted.current = true;
      isLeaving.current = false;
      onSelect(next);
    },
    [onSelect],
  );

  const startEdit = (row: number, column: number, text: string, mode: EditState['mode']) => {
    if (!editor) return;
    const refusal = editor.refuse(row, column);
    if (refusal !== null) {
      editor.notify(refusal);
      return;
    }
    setEditing({ row, column, text, mode });
  };

  const size = { rows: rows.length, columns: columns.length };
  const stateOfGrid = { selection, editing, editor, size, select, startEdit };
  const latest = useRef(stateOfGrid);
  useLayoutEffect(() => {
    latest.current = stateOfGrid;
  });

  const handlers = useMemo<RowHandlers>(
    () => ({
      finishEdit(text, move) {
        const now = latest.current;
        if (!now.editing || !now.editor) return;
        const { row, column } = now.editing;
        if (text !== null && !now.editor.commit(row, column, text)) return;
        setEditing(null);
        isFocusWanted.current = true;
        if (!move) return;
        const next = moveSelection(selectCell(row, column), { ...move, hasCommand: false }, now.size, 10);
        if (next && next !== 'leave') now.select(next);
      },
    }),
    [],
  );

  function onKeyDown(event: KeyboardEvent<HTMLDivElement>) {
    if (editing || event.altKey) return;
    const hasCommand = event.ctrlKey || event.metaKey;
    const current = selection ?? selectCell(tabStop.row, tabStop.column);
    const { row, column } = current.active;
    const done = () => event.preventDefault();
    const key = event.key.length === 1 ? event.key.toLowerCase() : event.key;
    if (hasCommand && key === 'a') {
      done();
      select({
        active: { row: 0, column: firstPlanned },
        head: { row: Math.max(0, totalRow - 1), column: columns.length - 1 },
      });
      return;
    }
    if (editor && hasCommand && (key === 'z' || key === 'y')) {
      done();
      if (key === 'y' || event.shiftKey) editor.redo();
      else editor.undo();
      return;
    }
    if (editor && hasCommand && key === 's') {
      done();
      editor.save();
      return;
    }
    if (key === 'Enter' || key === 'F2') {
      done();
      if (editor) startEdit(row, column, editor.textOf(row, column), 'amend');
      else onWhy?.();
      return;
    }
    if (editor && (key === 'Delete' || key === 'Backspace')) {
      done();
      editor.clear();
      return;
    }
    if (key === 'Escape') {
      isLeaving.current = true;
      if (!isOneCell(current)) {
        onSelect(selectCell(row, column));
      }
      return;
    }
    if (key === ' ') {
      done();
      onWhy?.();
      return;
    }
    if (editor && !hasCommand && /^[\d.,+\-−(]$/.test(event.key)) {
      done();
      startEdit(row, column, event.key, 'replace');
      return;
    }
    if (key === 'Tab' && isLeaving.current) {
      isLeaving.current = false;
      return;
    }
    const rowsPerPage = Math.max(
      1,
      Math.floor(((scroller.current?.clientHeight ?? 400) - headSize - totalHeight) / rowHeight) - 1,
    );
    const next = moveSelection(current, { key: event.key, shiftKey: event.shiftKey, hasCommand }, size, rowsPerPage);
    if (next === null || next === 'leave') return;
    done();
    select(next);
  }

  function cellAt(target: EventTarget): { row: number; column: number } | null {
    const cell = target instanceof Element ? target.closest<HTMLElement>('[data-column]') : null;
    if (!cell) return null;
    return { row: Number(cell.dataset.row), column: Number(cell.dataset.column) };
  }

  function onMouseDown(event: MouseEvent<HTMLDivElement>) {
    if (event.button !== 0 || (event.target instanceof Element && event.target.closest('input, a, button'))) return;
    const cell = cellAt(event.target);
    if (cell) {
      event.preventDefault();
      isDragging.current = true;
      select(
        event.shiftKey && selection ? { active: selection.active, head: cell } : selectCell(cell.row, cell.column),
      );
      return;
    }
    const heading = event.target instanceof Element ? event.target.closest<HTMLElement>('[data-heading]') : null;
    if (heading?.dataset.heading === 'row') {
      event.preventDefault();
      const row = Number(heading.dataset.index);
      select({ active: { row, column: firstPlanned }, head: { row, column: columns.length - 1 } });
    } else if (heading?.dataset.heading === 'week' && totalRow > 0) {
      event.preventDefault();
      const column = Number(heading.dataset.index);
      select({ active: { row: 0, column }, head: { row: totalRow - 1, column } });
    }
  }

  function onMouseOver(event: MouseEvent<HTMLDivElement>) {
    if (!isDragging.current || !selection || event.buttons !== 1) return;
    const cell = cellAt(event.target);
    if (cell && (cell.row !== headRow || cell.column !== headColumn)) select({ active: selection.active, head: cell });
  }

  function onDoubleClick(event: MouseEvent<HTMLDivElement>) {
    const cell = cellAt(event.target);
    if (cell && editor && !editing) startEdit(cell.row, cell.column, editor.textOf(cell.row, cell.column), 'amend');
  }

  function onCopy(event: ClipboardEvent<HTMLDivElement>) {
    if (editing || !selection) return;
    event.preventDefault();
    event.clipboardData.setData('text/plain', props.copyText(selection));
  }

  function onPaste(event: ClipboardEvent<HTMLDivElement>) {
    if (editing || !editor || !selection) return;
    event.preventDefault();
    editor.paste(event.clipboardData.getData('text/plain'));
  }

  function onFocus(event: { target: EventTarget }) {
    const cell = cellAt(event.target);
    if (cell && !selection && !isDragging.current) select(selectCell(cell.row, cell.column));
  }

  function onBlur(event: { relatedTarget: EventTarget | null; currentTarget: Element }) {
    if (event.relatedTarget instanceof Node && !event.currentTarget.contains(event.relatedTarget)) {
      isFocusWanted.current = false;
    }
  }

  const words = useMemo(
    () => ({
      weeks: columns.map(({ fullLabel }) =>
        t('cell.week', { week: Number(fullLabel.slice(-2)), year: fullLabel.slice(0, 4) }),
      ),
      plan: t('cell.plan'),
      sold: t('cell.sold'),
      unknown: t('cell.unknown'),
      own: t('cell.overridden'),
      through: t('cell.through'),
      look: t('cell.look'),
      decision: t('cell.decision'),
      outside: t('cell.outside'),
      beyond: t('cell.beyond'),
      pending: t('cell.pending'),
      locked: t('cell.locked'),
      gap: t('cell.gap'),
    }),
    [columns, t],
  );

  const rowProps = (index: number) => {
    const isSelected = rectangle !== null && index >= rectangle.firstRow && index <= rectangle.lastRow;
    return {
      index,
      columns,
      lefts,
      widths,
      shown: visibleColumns,
      nameWidth,
      selectedFirst: isSelected ? rectangle.firstColumn : -1,
      selectedLast: isSelected ? rectangle.lastColumn : -1,
      activeColumn: selection && selection.active.row === index ? selection.active.column : -1,
      tabColumn: tabStop.row === index ? tabStop.column : -1,
      editing: editing?.row === index ? editing : null,
      handlers,
      words,
    };
  };
  const total = tableRows[totalRow];
  const overlay =
    rectangle && !isOneCell(selection as Selection) && rectangle.firstRow < totalRow
      ? {
          left: lefts[rectangle.firstColumn] ?? 0,
          width:
            (lefts[rectangle.lastColumn] ?? 0) +
            (widths[rectangle.lastColumn] ?? 0) -
            (lefts[rectangle.firstColumn] ?? 0) -
            (columns[rectangle.lastColumn]?.isBeforeSeam ? seamGap : 0),
          top: headSize + rectangle.firstRow * rowHeight - 1,
          height: (Math.min(rectangle.lastRow, totalRow - 1) - rectangle.firstRow + 1) * rowHeight + 1,
        }
      : null;

  return (
    <div
      ref={scroller}
      className="plan-grid"
      role="grid"
      aria-label={props.label}
      aria-describedby="plan-grid-keys"
      aria-rowcount={rows.length + 1}
      aria-colcount={columns.length + 1}
      aria-multiselectable="true"
      aria-readonly={editor === null || props.isReadOnly === true}
      onKeyDown={onKeyDown}
      onMouseDown={onMouseDown}
      onMouseOver={onMouseOver}
      onDoubleClick={onDoubleClick}
      onCopy={onCopy}
      onPaste={onPaste}
      onFocus={onFocus}
      onBlur={onBlur}
    >
      <p id="plan-grid-keys" className="sr-only">
        {editor ? t('grid.keys') : t('grid.keysReadOnly')}
      </p>
      <div className="plan-grid-inner" style={{ width: innerWidth, height: headSize + bodyHeight + totalHeight }}>
        <GridHead
          cornerLabel={props.cornerLabel}
          nameWidth={nameWidth}
          columns={columns}
          lefts={lefts}
          widths={widths}
          shown={visibleColumns}
          months={months}
          pennants={pennants}
          hiddenPennants={hidden}
          lanes={lanes}
          holidays={props.holidays}
          seamGap={seamGap}
          selectedFirst={rectangle?.firstColumn ?? -1}
          selectedLast={rectangle?.lastColumn ?? -1}
        />
        <div role="rowgroup" style={{ height: bodyHeight }}>
          {rowVirtualizer.getVirtualItems().map(({ index, start }) => {
            const row = tableRows[index];
            return row ? <GridRowView key={row.id} row={row} top={start} {...rowProps(index)} /> : null;
          })}
        </div>
        {overlay && <div className="plan-grid-rectangle" style={overlay} aria-hidden="true" />}
        {seamLeft !== null && <div className="plan-grid-seam seam" style={{ left: seamLeft }} aria-hidden="true" />}
        <div role="rowgroup" className="plan-grid-total" style={{ height: totalHeight }}>
          {total && <GridRowView row={total} top={null} {...rowProps(totalRow)} />}
        </div>
      </div>
    </div>
  );
}
