import { useQuery } from '@tanstack/react-query';
import { useCallback, useEffect, useMemo, useState } from 'react';
import { useTranslation } from 'react-i18next';
import { useSearchParams } from 'react-router-dom';
import type { CellConflict, LinePlan, OverrideScope } from '../../../../shared/contracts/plan.ts';
import { scopeHolds } from '../../../../shared/domain/override-arithmetic.ts';
import { Button } from '../../../components/Button.tsx';
import { CloseButton } from '../../../components/CloseButton.tsx';
import { Menu, MenuChoice } from '../../../components/Menu.tsx';
import { Page } from '../../../components/Page.tsx';
import { ErrorState } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { Weekline } from '../../../components/Weekline.tsx';
import { ActLink } from '../../../components/Button.tsx';
import { withCategory } from '../../../lib/categories.ts';
import { formatInstant, formatNumber, personLocale, shortWeekLabel, weekLabel } from '../../../lib/format.ts';
import { useSession } from '../../../lib/session.ts';
import { buildColumns, defaultWindow, type GridColumn } from '../grid-columns.ts';
import { buildRows, rowModes, type GridRow, type RowMode } from '../grid-rows.ts';
import { downloadText, writeGridCsv } from '../grid-csv.ts';
import type { GridViewRow } from '../grid-table.ts';
import {
  asVersion,
  computeFigures,
  computeHistory,
  computeRow,
  planWeekStarts,
  rowOfVersion,
} from '../line-figures.ts';
import { measureLargestChange, countCells } from '../edit-size.ts';
import { decimalMarkOf, readFactor, readTypedNumber } from '../number-input.ts';
import type { PageState } from '../page-state.ts';
import { formatRectangle, parseRectangle, readRectangle, type PasteReading } from '../paste.ts';
import {
  compactEdits,
  editsForCells,
  editsForValues,
  settleEdits,
  type PendingEdit,
  type SettledCell,
} from '../pending-edits.ts';
import {
  readConflicts,
  reasonsQuery,
  useRefreshLine,
  useSaveOverrides,
  versionsQuery,
  versionStateQuery,
} from '../queries.ts';
import { computeSelection } from '../selection-figures.ts';
import { keepInside, rectangleOf, rowsThatCount, type Selection } from '../selection.ts';
import { useLineEdits } from '../use-line-edits.ts';
import { useWideScreen } from '../use-wide-screen.ts';
import { ConflictDialog } from './ConflictDialog.tsx';
import { FindingsNote } from './FindingsNote.tsx';
import { ForecastStart } from './ForecastStart.tsx';
import { GridKey } from './GridKey.tsx';
import { LineHeading } from './LineHeading.tsx';
import { PasteDialog } from './PasteDialog.tsx';
import { PlanGrid, type GridEditor } from './PlanGrid.tsx';
import { ReviewStrip } from './ReviewStrip.tsx';
import { SaveDialog, type SaveChoice } from './SaveDialog.tsx';
import { SelectionBar, type CellOperation } from './SelectionBar.tsx';
import { VersionsPanel } from './VersionsPanel.tsx';
import { describeOperation, WhyDrawer } from './WhyDrawer.tsx';

interface Notice {
  text: string;
  tone: 'word' | 'problem';
}

const ownMark = decimalMarkOf(personLocale);

/** Grid, key, selection bar and drawers of a line that has a plan. */
export function LinePlanView({
  plan,
  page,
  changePage,
}: {
  plan: LinePlan;
  page: PageState;
  changePage: (change: Partial<PageState>) => void;
}) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const { person } = useSession();
  const isWide = useWideScreen();
  const lineId = plan.line.id;
  useCategoryInAddress(plan.category.id);
  useItemInAddress(plan, changePage);

  const { edits, wereRestored, add, undo, redo, discard, replace } = useLineEdits(
    `fairweek-edits-${person.id}-${lineId}`,
  );
  const [notice, setNotice] = useState<Notice | null>(() =>
    wereRestored ? { text: t('edits.restored'), tone: 'word' } : null,
  );
  const [isSaveOpen, setSaveOpen] = useState(false);
  const [choice, setChoice] = useState<SaveChoice | null>(null);
  const [conflicts, setConflicts] = useState<CellConflict[] | null>(null);
  const reasons = useQuery({ ...reasonsQuery, enabled: conflicts !== null }).data?.reasons;
  const [reading, setReading] = useState<Extract<PasteReading, { kind: 'two-ways' }> | null>(null);
  const save = useSaveOverrides(lineId);
  const refreshLine = useRefreshLine(lineId);

  const versions = useQuery(versionsQuery(lineId)).data?.versions;
  const newestNumber = versions?.reduce((newest, { number }) => Math.max(newest, number), 0) ?? 0;
  const shownNumber = plan.version?.number ?? 0;
  const isBehind = newestNumber > shownNumber;
  useEffect(() => {
    if (isBehind) void refreshLine();
    // Asking again is for a newer version alone, not for every drawing.
    // eslint-disable-next-line react-hooks/exhaustive-deps
  }, [isBehind, newestNumber]);

  const readsVersion = page.version !== null && page.version !== shownNumber ? page.version : null;
  const versionState = useQuery({
    ...versionStateQuery(lineId, readsVersion ?? 0),
    enabled: readsVersion !== null,
  });
  const lockedNumber =
    versions
      ?.filter(({ isLockedVersion }) => isLockedVersion)
      .reduce<number | null>((newest, { number }) => Math.max(newest ?? 0, number), null) ?? null;
  const lockedState = useQuery({
    ...versionStateQuery(lineId, lockedNumber ?? 0),
    enabled: lockedNumber !== null,
  }).data;

  const compacted = useMemo(() => {
    const isSaved = (scope: OverrideScope, weekStart: string) =>
      plan.overrides.some(
        (override) =>
          override.operation !== 'clear' &&
          override.firstWeek <= weekStart &&
          override.lastWeek >= weekStart &&
          scopeHolds(scope, override.scope),
      );
    return compactEdits(edits.done, isSaved);
  }, [edits.done, plan.overrides]);
  const changes = countCells(compacted);
  const hasEdits = compacted.length > 0;

  const currentFigures = useMemo(() => computeFigures(plan, compacted), [plan, compacted]);
  const figures = useMemo(
    () => (readsVersion !== null && versionState.data ? asVersion(plan, versionState.data) : currentFigures),
    [plan, readsVersion, versionState.data, currentFigures],
  );
  const locationId = plan.locations.some(({ id }) => id === page.locationId) ? page.locationId : null;
  const rows = useMemo(() => buildRows(plan, page.down, locationId), [plan, page.down, locationId]);
  const histories = useMemo(() => rows.map((row) => computeHistory(plan, row)), [plan, rows]);
  const rowFigures = useMemo(
    () => rows.map((row, index) => computeRow(plan, figures, row, histories[index] ?? computeHistory(plan, row))),
    [plan, figures, rows, histories],
  );
  const nameOf = useCallback(
    (row: GridRow) => {
      if (row.kind !== 'total') return row.detail === null ? row.label : `${row.label}, ${row.detail}`;
      return row.detail === null ? t('grid.total') : t('grid.totalAt', { location: row.detail });
    },
    [t],
  );
  const describeScope = useCallback(
    ({ itemId, locationId: at }: OverrideScope) => {
      const item = plan.items.find(({ id }) => id === itemId)?.name;
      const location = plan.locations.find(({ id }) => id === at)?.name;
      if (item === undefined && location === undefined) return t('grid.total');
      return [item, location].filter((part) => part !== undefined).join(', ');
    },
    [plan.items, plan.locations, t],
  );

  const itemNames = useMemo(() => new Map(plan.items.map(({ code, name }) => [code, name])), [plan.items]);

  const first = defaultWindow(plan);
  const from = page.from ?? first?.from ?? '';
  const to = page.to ?? first?.to ?? '';
  const columns = useMemo(() => buildColumns(plan, from, to), [plan, from, to]);
  const viewRows = useMemo<GridViewRow[]>(() => {
    const locked = new Set(plan.lockedWeeks);
    const lockedAt = planWeekStarts(plan).map((week) => locked.has(week));
    return rows.flatMap((row, index) => {
      const ofRow = rowFigures[index];
      if (!ofRow) return [];
      return {
        key: row.key,
        name: nameOf(row),
        heading:
          row.kind === 'series' && plan.locations.length > 1 ? (
            <>
              {row.label} <span className="text-soft">{row.detail}</span>
            </>
          ) : row.kind === 'total' ? (
            nameOf(row)
          ) : (
            row.label
          ),
        isTotal: row.kind === 'total',
        figures: ofRow,
        lockedAt,
      };
    });
  }, [rows, rowFigures, plan, nameOf]);
  const nameWidth = useMemo(() => {
    const longest = viewRows.reduce((most, { name }) => Math.max(most, name.length), 8);
    return Math.min(260, Math.max(132, Math.round(longest * 6.7) + 14));
  }, [viewRows]);

  const selection = useMemo((): Selection | null => {
    if (!page.cell) return null;
    const rowAt = new Map(rows.map(({ key }, index) => [key, index]));
    const columnAt = new Map(columns.map(({ weekStart }, index) => [weekStart, index]));
    const place = (cell: PageState['cell']) => {
      const row = cell && rowAt.get(cell.row);
      const column = cell && columnAt.get(cell.weekStart);
      return row === undefined || column === undefined || row === null || column === null ? null : { row, column };
    };
    const active = place(page.cell);
    if (!active) return null;
    return keepInside({ active, head: place(page.head) ?? active }, { rows: rows.length, columns: columns.length });
  }, [page.cell, page.head, rows, columns]);
  const onSelect = useCallback(
    (next: Selection) => {
      const cellOf = ({ row, column }: Selection['active']) => {
        const at = rows[row];
        const week = columns[column];
        return at && week ? { row: at.key, weekStart: week.weekStart } : null;
      };
      const isSame = next.active.row === next.head.row && next.active.column === next.head.column;
      changePage({ cell: cellOf(next.active), head: isSame ? null : cellOf(next.head) });
      setNotice(null);
    },
    [rows, columns, changePage],
  );

  const isWhyOpen = selection !== null && !page.isVersionsOpen && (page.isWhyOpen ?? isWide);
  const mayEdit = plan.may.override && readsVersion === null;
  const tell = (text: string, tone: Notice['tone'] = 'word') => setNotice({ text, tone });

  /** Takes a step if every part of it can be met; else says why not. */
  function take(step: PendingEdit[], lockedWeeks: readonly GridColumn[] = []): boolean {
    if (step.length === 0) {
      tell(lockedWeeks.length > 0 ? refuseLocked(lockedWeeks[0]) : t('refuse.history'), 'problem');
      return false;
    }
    const before = new Set(currentFigures.unmet.map((each) => `${each.weekStart}/${describeScope(each.edit.scope)}`));
    const tried = computeFigures(plan, compactEdits([...edits.done, step]));
    const unmet = tried.unmet.filter((each) => !before.has(`${each.weekStart}/${describeScope(each.edit.scope)}`));
    const worst = unmet[0];
    if (worst) {
      tell(
        t(`unmet.${worst.reason}`, {
          scope: describeScope(worst.edit.scope),
          week: shortWeekLabel(worst.weekStart),
          count: unmet.length,
        }),
        'problem',
      );
      return false;
    }
    add(step, shownNumber);
    setNotice(
      lockedWeeks.length > 0
        ? {
            text: t('edits.lockedLeftOut', { weeks: lockedWeeks.map(({ label }) => label).join(', ') }),
            tone: 'word',
          }
        : null,
    );
    return true;
  }

  function refuseLocked(column: GridColumn | undefined): string {
    const lock = plan.locks.find(
      ({ firstWeek, lastWeek }) => column && column.weekStart >= firstWeek && column.weekStart <= lastWeek,
    );
    return lock
      ? t('refuse.locked', { week: column?.label, version: lock.version, actor: lock.actor })
      : t('refuse.lockedPlain', { week: column?.label });
  }

  function refuse(row: number, column: number): string | null {
    if (readsVersion !== null) return t('refuse.version', { number: readsVersion });
    if (!plan.may.override) {
      if (plan.state === 'submitted') return t('refuse.submitted');
      if (plan.state === 'locked') return t('refuse.lockedLine');
      return t('refuse.right');
    }
    const week = columns[column];
    if (!week || !rows[row]) return null;
    if (week.kind === 'history') return t('refuse.history');
    return week.isLocked ? refuseLocked(week) : null;
  }

  function commit(row: number, column: number, text: string): boolean {
    const gridRow = rows[row];
    const week = columns[column];
    if (!gridRow || !week || text.trim() === textOf(row, column)) return true;
    if (text.trim() === '') {
      clearCells([row], [week]);
      return true;
    }
    const value = readTypedNumber(text, ownMark);
    if (value === null) {
      tell(t('refuse.noNumber', { text }), 'problem');
      return false;
    }
    if (value < 0) {
      tell(t('refuse.negative'), 'problem');
      return false;
    }
    const step: PendingEdit[] = [
      { scope: gridRow.scope, firstWeek: week.weekStart, lastWeek: week.weekStart, operation: 'set to', value },
    ];
    if (!take(step)) return false;
    const tried = computeFigures(plan, compactEdits([...edits.done, step]));
    const became = computeRow(plan, tried, gridRow, { history: [], gaps: [] }).plan[week.index];
    if (became !== undefined && Math.abs(became - value) > 1e-9) {
      tell(t('edits.rounded', { value: formatNumber(value, 6), became: formatNumber(became, 6) }));
    }
    return true;
  }

  function textOf(row: number, column: number): string {
    const week = columns[column];
    const value = week?.kind === 'plan' ? rowFigures[row]?.plan[week.index] : undefined;
    return value === undefined || Number.isNaN(value) ? '' : String(value).replace('.', ownMark);
  }

  function chosenCells() {
    if (!selection) return null;
    const rectangle = rectangleOf(selection);
    const chosenRows = rowsThatCount(rectangle, rows.length - 1);
    const weeks = columns
      .slice(rectangle.firstColumn, rectangle.lastColumn + 1)
      .filter((column) => column.kind === 'plan');
    return { chosenRows, weeks, locked: weeks.filter((column) => column.isLocked) };
  }

  function clearCells(chosenRows: readonly number[], weeks: readonly GridColumn[]): void {
    const step: PendingEdit[] = [];
    let isFromElsewhere = false;
    for (const position of chosenRows) {
      const row = rows[position];
      if (!row) continue;
      const isToClear = (week: GridColumn) => {
        if (week.isLocked) return false;
        const covers = (edit: { firstWeek: string; lastWeek: string; operation: string; scope: OverrideScope }) =>
          edit.operation !== 'clear' &&
          edit.firstWeek <= week.weekStart &&
          edit.lastWeek >= week.weekStart &&
          scopeHolds(row.scope, edit.scope);
        const isHeld = plan.overrides.some(covers) || compacted.some(covers);
        if (!isHeld && rowFigures[position]?.marks[week.index]?.overridden === 'through') isFromElsewhere = true;
        return isHeld;
      };
      const held = weeks.filter(isToClear).map(({ weekStart }) => weekStart);
      step.push(...editsForCells([row.scope], held, 'clear', null, () => true));
    }
    if (step.length > 0) take(step);
    else tell(isFromElsewhere ? t('refuse.clearElsewhere') : t('refuse.nothingToClear'), 'problem');
  }

  function applyPaste(values: (number | null)[][]): void {
    if (!selection) return;
    const rectangle = rectangleOf(selection);
    const only = values.length === 1 && values[0]?.length === 1 ? values[0][0] : undefined;
    const rowCount = only === undefined ? values.length : rectangle.lastRow - rectangle.firstRow + 1;
    const columnCount =
      only === undefined
        ? Math.max(...values.map((each) => each.length))
        : rectangle.lastColumn - rectangle.firstColumn + 1;
    const target = {
      firstRow: rectangle.firstRow,
      lastRow: rectangle.firstRow + rowCount - 1,
      firstColumn: rectangle.firstColumn,
      lastColumn: rectangle.firstColumn + columnCount - 1,
    };
    const counted = new Set(
      rowsThatCount({ ...target, lastRow: Math.min(target.lastRow, rows.length - 1) }, rows.length - 1),
    );
    const cells: { scope: OverrideScope; weekStart: string; value: number }[] = [];
    let outside = 0;
    let isNegative = false;
    const locked = new Set<GridColumn>();
    for (let down = 0; down < rowCount; down += 1) {
      for (let across = 0; across < columnCount; across += 1) {
        const value = only === undefined ? values[down]?.[across] : only;
        if (value === null || value === undefined) continue;
        const row = rows[target.firstRow + down];
        const column = columns[target.firstColumn + across];
        if (!row || !column || column.kind === 'history' || !counted.has(target.firstRow + down)) outside += 1;
        else if (column.isLocked) locked.add(column);
        else if (value < 0) isNegative = true;
        else cells.push({ scope: row.scope, weekStart: column.weekStart, value });
      }
    }
    if (isNegative) {
      tell(t('refuse.negative'), 'problem');
      return;
    }
    if (!take(editsForValues(cells), [...locked])) return;
    onSelect({
      active: { row: target.firstRow, column: target.firstColumn },
      head: {
        row: Math.min(target.lastRow, rows.length - 1),
        column: Math.min(target.lastColumn, columns.length - 1),
      },
    });
    const parts = [t('paste.done', { count: cells.length })];
    if (locked.size > 0) {
      parts.push(t('edits.lockedLeftOut', { weeks: [...locked].map(({ label }) => label).join(', ') }));
    }
    if (outside > 0) parts.push(t('paste.outside', { count: outside }));
    tell(parts.join(' '));
  }

  const editor: GridEditor = {
    refuse,
    commit,
    textOf,
    clear() {
      const chosen = chosenCells();
      if (!chosen || !selection) return;
      const refusal = refuse(selection.active.row, selection.active.column);
      if (refusal !== null && (!mayEdit || chosen.weeks.length === chosen.locked.length)) tell(refusal, 'problem');
      else clearCells(chosen.chosenRows, chosen.weeks);
    },
    paste(text) {
      if (!mayEdit) {
        tell(refuse(0, 0) ?? t('refuse.right'), 'problem');
        return;
      }
      const cells = parseRectangle(text);
      if (cells.length === 0) return;
      const read = readRectangle(cells, ownMark);
      if (read.kind === 'numbers') applyPaste(read.values);
      else if (read.kind === 'two-ways') setReading(read);
      else {
        tell(t('paste.unreadable', { count: read.cells.length, text: read.cells[0]?.text ?? '' }), 'problem');
      }
    },
    undo() {
      if (edits.done.length > 0) undo();
      else tell(t('edits.nothingToUndo'));
    },
    redo() {
      if (edits.undone.length > 0) redo();
      else tell(t('edits.nothingToRedo'));
    },
    save() {
      if (hasEdits) openSave();
      else tell(t('edits.nothingToSave'));
    },
    notify: (sentence) => tell(sentence, 'problem'),
  };

  function onApply(operation: CellOperation, text: string): boolean {
    const chosen = chosenCells();
    if (!chosen) return false;
    const value = operation === 'scale by' ? readFactor(text, ownMark) : readTypedNumber(text, ownMark);
    if (value === null) {
      tell(t('refuse.noNumber', { text }), 'problem');
      return false;
    }
    if (value < 0 && operation !== 'add') {
      tell(operation === 'scale by' ? t('refuse.negativeFactor') : t('refuse.negative'), 'problem');
      return false;
    }
    const scopes = chosen.chosenRows.flatMap((row) => rows[row]?.scope ?? []);
    const locked = new Set(chosen.locked.map(({ weekStart }) => weekStart));
    const step = editsForCells(
      scopes,
      chosen.weeks.map(({ weekStart }) => weekStart),
      operation,
      value,
      (week) => !locked.has(week),
    );
    return take(step, chosen.locked);
  }

  /** What others have locked or fixed meanwhile, so that it can't be saved any more. */
  const unmet = hasEdits && readsVersion === null ? currentFigures.unmet : [];
  function leaveUnmetOut(): void {
    const settled = unmet.map(({ edit, weekStart }) => ({
      scope: edit.scope,
      weekStart,
      keep: 'theirs' as const,
      yours: 0,
    }));
    replace(settleEdits(compacted, settled), edits.baseVersion ?? shownNumber);
  }

  function openSave(): void {
    save.reset();
    setSaveOpen(true);
  }

  function sendSave(toSave: readonly PendingEdit[], baseVersion: number, because: SaveChoice): void {
    setChoice(because);
    save.mutate(
      { baseVersion, overrides: toSave.map((edit) => ({ ...edit, ...because })) },
      {
        onSuccess: (saved) => {
          discard();
          setSaveOpen(false);
          setConflicts(null);
          setNotice(null);
          showToast({ tone: 'done', text: t('save.done', { number: saved.version.number, line: plan.line.name }) });
        },
        onError: (error) => {
          const found = readConflicts(error);
          if (found) {
            setConflicts(found);
            setSaveOpen(false);
          } else {
            setConflicts(null);
            setSaveOpen(true);
            void refreshLine();
          }
        },
      },
    );
  }

  async function onSettle(settled: SettledCell[]): Promise<void> {
    if (!conflicts || !choice) return;
    const left = settleEdits(compacted, settled);
    const base = conflicts.reduce((newest, { theirVersion }) => Math.max(newest, theirVersion), edits.baseVersion ?? 0);
    replace(left, base);
    await refreshLine();
    if (left.length === 0) {
      setConflicts(null);
      showToast({ tone: 'done', text: t('conflict.nothingLeft', { version: base }) });
    } else sendSave(left, base, choice);
  }

  const lockedRows = useMemo(() => {
    if (!lockedState) return null;
    const held = new Map<number, Map<string, number>>();
    return (position: number) => {
      let values = held.get(position);
      const row = rows[position];
      if (!values) {
        values = row ? rowOfVersion(lockedState, plan, row) : new Map<string, number>();
        held.set(position, values);
      }
      return values;
    };
  }, [lockedState, rows, plan]);
  const selectionFigures = useMemo(
    () =>
      selection
        ? computeSelection(selection, viewRows, columns, lockedRows, (chosenRows, weeks) =>
            [
              chosenRows.length === 1
                ? (viewRows[chosenRows[0] ?? 0]?.name ?? '')
                : t(`selection.rows.${page.down}`, { count: chosenRows.length }),
              weeks.length === 1 ? (weeks[0]?.label ?? '') : t('selection.weeks', { count: weeks.length }),
            ].join(', '),
          )
        : null,
    [selection, viewRows, columns, lockedRows, t, page.down],
  );
  const copyText = (chosen: Selection) => {
    const { firstRow, lastRow, firstColumn, lastColumn } = rectangleOf(chosen);
    return formatRectangle(
      viewRows.slice(firstRow, lastRow + 1).map(({ figures: row }) =>
        columns.slice(firstColumn, lastColumn + 1).map((column) => {
          const value = column.kind === 'history' ? row.history[column.index] : row.plan[column.index];
          return value === undefined || value === null || Number.isNaN(value) ? null : value;
        }),
      ),
      ownMark,
    );
  };
  const howOwn = (conflict: CellConflict) => {
    const edit = compacted.findLast(
      ({ scope, firstWeek, lastWeek }) =>
        firstWeek <= conflict.weekStart && lastWeek >= conflict.weekStart && scopeHolds(scope, conflict.scope),
    );
    return edit ? describeOperation(t, edit.operation, edit.value) : null;
  };

  const activeRow = selection ? rows[selection.active.row] : undefined;
  const activeColumn = selection ? columns[selection.active.column] : undefined;
  const activeFigures = selection ? rowFigures[selection.active.row] : undefined;
  const locationName = plan.locations.find(({ id }) => id === locationId)?.name ?? t('tools.allLocations');
  const isReviewed = plan.state === 'submitted' && (plan.may.lock || plan.may.returnLine);
  const contentHeight = { '--plan-content': `${110 + viewRows.length * 25}px` } as React.CSSProperties;

  return (
    <Page
      fill
      weekline={
        plan.weekline && (
          <Weekline
            weekline={plan.weekline}
            title={plan.line.name}
            range={{ firstWeek: columns[0]?.weekStart ?? from, lastWeek: columns.at(-1)?.weekStart ?? to }}
            onRangeChange={({ firstWeek, lastWeek }) => changePage({ from: firstWeek, to: lastWeek })}
          />
        )
      }
    >
      <div className="plan-work">
        <div className="plan-main">
          <div
            className={isWhyOpen || page.isVersionsOpen ? 'plan-scroll has-drawer' : 'plan-scroll'}
            style={contentHeight}
          >
            <LineHeading plan={plan} hasEdits={hasEdits} />
            {readsVersion !== null && (
              <div role="status" className="mb-2 flex flex-wrap items-center gap-x-4 border-l-2 border-plum py-1 pl-3">
                {versionState.error ? (
                  <ErrorState error={versionState.error} onRetry={() => void versionState.refetch()} />
                ) : (
                  <span>
                    <b>{t('versions.reading', { number: readsVersion })}</b>{' '}
                    {versionState.data &&
                      t('versions.readingDetail', {
                        author: versionState.data.version.author,
                        at: formatInstant(versionState.data.version.at),
                      })}
                  </span>
                )}
                <Button variant="text" onClick={() => changePage({ version: null })}>
                  {t('versions.back', { number: shownNumber })}
                </Button>
              </div>
            )}
            {(plan.isBehindSales || plan.activeJob) && (
              <div className="mb-2 flex flex-wrap items-center gap-x-6 gap-y-1 border-l-2 border-turmeric py-1 pl-3">
                {plan.isBehindSales && <span>{t('behindSales')}</span>}
                <ForecastStart
                  isQuiet
                  categoryId={plan.category.id}
                  activeJob={plan.activeJob}
                  mayForecast={plan.may.forecast}
                  horizonWeeks={plan.planWeeks}
                  action={t('forecast.again')}
                />
              </div>
            )}
            {plan.findings.length > 0 && (
              <div className="mb-1">
                <FindingsNote findings={plan.findings} itemNames={itemNames} />
              </div>
            )}
            {isReviewed && (
              <ReviewStrip
                plan={plan}
                rows={rows}
                figures={rowFigures}
                names={viewRows.map(({ name }) => name)}
                locked={lockedState ?? null}
              />
            )}
            <div className="flex min-h-9 flex-wrap items-center gap-x-5 gap-y-1 border-t border-line py-1">
              <Menu
                label={t('tools.downLabel')}
                trigger={
                  <>
                    <span className="text-soft">{t('tools.down')}</span> <b>{t(`tools.mode.${page.down}`)}</b>
                  </>
                }
              >
                <MenuChoice
                  value={page.down}
                  onChange={(down) => changePage({ down: down as RowMode, cell: null, head: null })}
                  options={rowModes.map((mode) => ({ value: mode, label: t(`tools.mode.${mode}`) }))}
                />
              </Menu>
              {plan.locations.length > 1 && (
                <Menu
                  label={t('tools.locationLabel')}
                  trigger={
                    <>
                      <span className="text-soft">{t('tools.location')}</span> <b>{locationName}</b>
                    </>
                  }
                >
                  <MenuChoice
                    value={String(locationId ?? 'all')}
                    onChange={(value) =>
                      changePage({ locationId: value === 'all' ? null : Number(value), cell: null, head: null })
                    }
                    options={[
                      { value: 'all', label: t('tools.allLocations') },
                      ...plan.locations.map(({ id, name }) => ({ value: String(id), label: name })),
                    ]}
                  />
                </Menu>
              )}
              <div className="ml-auto flex flex-wrap items-center gap-x-5 gap-y-1">
                <Button
                  variant="text"
                  aria-expanded={page.isVersionsOpen}
                  onClick={() => changePage({ isVersionsOpen: !page.isVersionsOpen })}
                >
                  {t('versions.title')}
                </Button>
                <ActLink to={withCategory(`/lines/${lineId}`, plan.category.id)}>{t('tools.model')}</ActLink>
                <Button
                  variant="text"
                  onClick={() =>
                    downloadText(
                      `${plan.line.name} ${columns[0]?.fullLabel ?? ''} ${columns.at(-1)?.fullLabel ?? ''}.csv`,
                      writeGridCsv(
                        viewRows,
                        columns,
                        { corner: t(`grid.corner.${page.down}`), sold: t('cell.sold'), planned: t('cell.plan') },
                        ownMark,
                      ),
                    )
                  }
                >
                  {t('tools.download')}
                </Button>
                {(mayEdit || hasEdits) && (
                  <>
                    <Button variant="text" disabled={edits.done.length === 0} onClick={undo}>
                      {t('edits.undo')}
                    </Button>
                    <Button variant="text" disabled={edits.undone.length === 0} onClick={redo}>
                      {t('edits.redo')}
                    </Button>
                    {hasEdits && (
                      <Button variant="text" onClick={discard}>
                        {t('edits.discard')}
                      </Button>
                    )}
                    <Button className="!h-7 tabular-nums" disabled={!hasEdits || save.isPending} onClick={openSave}>
                      {hasEdits ? t('save.action', { count: changes }) : t('save.none')}
                    </Button>
                  </>
                )}
              </div>
            </div>
            <PlanGrid
              label={t('grid.label', { line: plan.line.name })}
              cornerLabel={t(`grid.corner.${page.down}`)}
              nameWidth={nameWidth}
              rows={viewRows}
              columns={columns}
              promotions={plan.promotions}
              holidays={plan.holidays}
              selection={selection}
              onSelect={onSelect}
              copyText={copyText}
              editor={editor}
              isReadOnly={!mayEdit}
              onWhy={() => changePage({ isWhyOpen: !isWhyOpen, isVersionsOpen: false })}
            />
            <div aria-live="polite">
              {notice ? (
                <p
                  className={`flex min-h-[34px] items-center gap-4 ${
                    notice.tone === 'problem' ? 'font-[560] text-madder' : 'text-ink'
                  }`}
                >
                  <span className={`border-l-2 pl-3 ${notice.tone === 'problem' ? 'border-madder' : 'border-moss'}`}>
                    {notice.text}
                  </span>
                  <CloseButton label={common('close')} onClick={() => setNotice(null)} />
                </p>
              ) : unmet.length > 0 ? (
                <p className="flex min-h-[34px] flex-wrap items-center gap-x-4 font-[560] text-madder">
                  <span className="border-l-2 border-madder pl-3">
                    {t('edits.unmet', {
                      count: unmet.length,
                      weeks: [...new Set(unmet.map(({ weekStart }) => shortWeekLabel(weekStart)))].sort().join(', '),
                    })}
                  </span>
                  <Button variant="text" onClick={leaveUnmetOut}>
                    {t('edits.leaveOut')}
                  </Button>
                </p>
              ) : (
                <GridKey
                  hasPending={hasEdits}
                  note={
                    hasEdits && edits.baseVersion !== null && edits.baseVersion < shownNumber
                      ? t('edits.othersSaved', { author: plan.version?.author, number: shownNumber })
                      : plan.run && t('estimates', { week: weekLabel(plan.run.salesTo) })
                  }
                />
              )}
            </div>
          </div>
          <SelectionBar
            figures={selectionFigures}
            lockedVersion={lockedNumber}
            mayEdit={mayEdit}
            onApply={onApply}
            isWhyOpen={isWhyOpen}
            onWhy={() => changePage({ isWhyOpen: true, isVersionsOpen: false })}
          />
        </div>
        {page.isVersionsOpen && (
          <VersionsPanel
            lineId={lineId}
            shown={readsVersion ?? shownNumber}
            onOpen={(number) => changePage({ version: number })}
            onClose={() => changePage({ isVersionsOpen: false })}
          />
        )}
        {isWhyOpen && activeRow && activeColumn && activeFigures && (
          <WhyDrawer
            plan={plan}
            row={activeRow}
            name={nameOf(activeRow)}
            column={activeColumn}
            figures={activeFigures}
            lineFigures={figures}
            pending={readsVersion === null ? compacted : []}
            describeScope={describeScope}
            onClose={() => changePage({ isWhyOpen: false })}
          />
        )}
      </div>
      {isSaveOpen && (
        <SaveDialog
          changes={changes}
          largestChange={measureLargestChange(plan, currentFigures.plan, compacted)}
          start={choice}
          isBusy={save.isPending}
          error={save.error && !readConflicts(save.error) ? save.error : null}
          onSave={(because) => sendSave(compacted, edits.baseVersion ?? shownNumber, because)}
          onClose={() => setSaveOpen(false)}
        />
      )}
      {conflicts && (
        <ConflictDialog
          conflicts={conflicts}
          baseVersion={edits.baseVersion ?? shownNumber}
          otherChanges={Math.max(0, changes - conflicts.length)}
          own={{
            author: person.name,
            reason: reasons?.find(({ id }) => id === choice?.reasonId)?.name ?? null,
            note: choice?.note ?? null,
            describe: howOwn,
          }}
          nameOf={(conflict) => describeScope(conflict.scope)}
          isBusy={save.isPending}
          onSettle={(settled) => void onSettle(settled)}
          onClose={() => setConflicts(null)}
        />
      )}
      {reading && (
        <PasteDialog
          example={reading.example}
          byMark={reading.byMark}
          ownMark={ownMark}
          onPick={(values) => {
            setReading(null);
            applyPaste(values);
          }}
          onClose={() => setReading(null)}
        />
      )}
    </Page>
  );
}

/** The category in the top bar follows the line on screen. */
function useCategoryInAddress(categoryId: number): void {
  const [search, setSearch] = useSearchParams();
  const isOther = search.get('category') !== String(categoryId);
  useEffect(() => {
    if (!isOther) return;
    setSearch(
      (held) => {
        const next = new URLSearchParams(held);
        next.set('category', String(categoryId));
        return next;
      },
      { replace: true },
    );
  }, [isOther, categoryId, setSearch]);
}

/** `?item=7`, as the Find box links, selects that item's first planned week. */
function useItemInAddress(plan: LinePlan, changePage: (change: Partial<PageState>) => void): void {
  const [search] = useSearchParams();
  const asked = search.get('item');
  const row = plan.items.some(({ id }) => String(id) === asked) ? `i${asked}` : null;
  const weekStart = plan.planFirstWeek;
  useEffect(() => {
    if (row !== null && weekStart !== null) {
      changePage({ down: 'items', locationId: null, cell: { row, weekStart }, head: null });
    }
  }, [row, weekStart, changePage]);
}
