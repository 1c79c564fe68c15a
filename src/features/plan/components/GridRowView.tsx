import type { Row } from '@tanstack/react-table';
import { memo, useEffect, useRef, type KeyboardEvent } from 'react';
import { useTranslation } from 'react-i18next';
import { ForkMark, RingMark } from '../../../components/marks.tsx';
import { formatNumber } from '../../../lib/format.ts';
import type { GridColumn } from '../grid-columns.ts';
import type { gridFeatures, GridViewRow } from '../grid-table.ts';

export interface EditState {
  row: number;
  column: number;
  text: string;
  /** `replace` began by typing, so that arrows go on to the next cell; in `amend` they move within the text. */
  mode: 'replace' | 'amend';
}

export interface RowHandlers {
  /** Ends editing: `text` null drops it; `move` says where to go on. */
  finishEdit: (text: string | null, move: { key: string; shiftKey: boolean } | null) => void;
}

interface GridRowViewProps {
  row: Row<typeof gridFeatures, GridViewRow>;
  index: number;
  /** px from the top of the grid's inside; null = stands where it is. */
  top: number | null;
  columns: readonly GridColumn[];
  lefts: readonly number[];
  widths: readonly number[];
  shown: readonly number[];
  nameWidth: number;
  selectedFirst: number;
  selectedLast: number;
  activeColumn: number;
  tabColumn: number;
  editing: EditState | null;
  handlers: RowHandlers;
}

export const GridRowView = memo(function GridRowView(props: GridRowViewProps) {
  const { row, index, top, columns, lefts, widths, shown, selectedFirst, selectedLast, editing } = props;
  const { t } = useTranslation('plan');
  const { name, heading, figures, lockedAt, isTotal } = row.original;
  return (
    <div
      role="row"
      aria-rowindex={index + 2}
      className={`plan-row${isTotal ? ' is-total' : ''}${index % 4 === 3 ? ' is-fourth' : ''}`}
      style={top === null ? undefined : { top }}
    >
      <div
        role="rowheader"
        aria-colindex={1}
        className="plan-name"
        style={{ width: props.nameWidth }}
        data-heading="row"
        data-index={index}
      >
        {heading}
      </div>
      {shown.map((at) => {
        const column = columns[at];
        if (!column) return null;
        const isPlan = column.kind === 'plan';
        const value = row.getValue<number | null>(column.weekStart);
        const marks = isPlan ? figures.marks[column.index] : undefined;
        const isLocked = isPlan && lockedAt[column.index] === true;
        const gaps = isPlan ? 0 : (figures.gaps[column.index] ?? 0);
        const isActive = props.activeColumn === at;
        const isEditing = editing?.column === at;
        const figure = value === null ? '–' : formatNumber(value);
        const classes = ['plan-cell'];
        if (isPlan) classes.push('is-plan');
        if (isLocked) classes.push('is-locked');
        if (isActive) classes.push('is-active');
        if (column.isBeforeSeam) classes.push('is-before-seam');
        if (marks?.isPending) classes.push('is-pending');
        let figureClass: string | undefined;
        if (marks?.overridden === 'own') figureClass = 'over';
        else if (marks?.overridden === 'through') figureClass = 'over-through';
        else if (gaps > 0) figureClass = 'gap-figure';
        const words = [
          name,
          t('cell.week', { week: Number(column.fullLabel.slice(-2)), year: column.fullLabel.slice(0, 4) }),
          isPlan ? t('cell.plan', { figure }) : value === null ? t('cell.unknown') : t('cell.sold', { figure }),
        ];
        if (marks?.overridden === 'own') words.push(t('cell.overridden'));
        if (marks?.overridden === 'through') words.push(t('cell.through'));
        if (marks?.isDueAnotherLook) words.push(t('cell.look'));
        if (marks?.needsDecision) words.push(t('cell.decision'));
        if (marks?.isOutsideRange) words.push(t('cell.outside'));
        if (marks?.isPending) words.push(t('cell.pending'));
        if (isLocked) words.push(t('cell.locked'));
        if (gaps > 0) words.push(t('cell.gap'));
        return (
          <div
            key={column.weekStart}
            role="gridcell"
            aria-colindex={at + 2}
            aria-label={words.join(', ')}
            aria-selected={at >= selectedFirst && at <= selectedLast}
            aria-readonly={!isPlan || isLocked}
            tabIndex={props.tabColumn === at ? 0 : -1}
            data-row={index}
            data-column={at}
            className={classes.join(' ')}
            style={{ left: lefts[at], width: widths[at] }}
          >
            {isEditing ? (
              <CellField edit={editing} label={words.slice(0, 2).join(', ')} handlers={props.handlers} />
            ) : (
              <>
                <span className={figureClass}>{figure}</span>
                {marks && (marks.isDueAnotherLook || marks.needsDecision || marks.isOutsideRange) && (
                  <span className="plan-mark">
                    {marks.needsDecision ? (
                      <span className="plan-decision">!</span>
                    ) : marks.isDueAnotherLook ? (
                      <RingMark />
                    ) : (
                      <ForkMark />
                    )}
                  </span>
                )}
              </>
            )}
          </div>
        );
      })}
    </div>
  );
});

function CellField({ edit, label, handlers }: { edit: EditState; label: string; handlers: RowHandlers }) {
  const field = useRef<HTMLInputElement>(null);
  const isOver = useRef(false);
  useEffect(() => {
    const input = field.current;
    if (!input) return;
    input.focus();
    if (edit.mode === 'amend') input.select();
    else input.setSelectionRange(input.value.length, input.value.length);
  }, [edit.mode]);
  const finish = (text: string | null, move: { key: string; shiftKey: boolean } | null) => {
    isOver.current = true;
    handlers.finishEdit(text, move);
    // A text that wasn't taken leaves the field where it is.
    isOver.current = false;
  };
  function onKeyDown(event: KeyboardEvent<HTMLInputElement>) {
    event.stopPropagation();
    const text = event.currentTarget.value;
    const { key, shiftKey } = event;
    if (key === 'Escape') {
      event.preventDefault();
      finish(null, null);
    } else if (key === 'Enter') {
      event.preventDefault();
      finish(text, { key: shiftKey ? 'ArrowUp' : 'ArrowDown', shiftKey: false });
    } else if (key === 'Tab') {
      event.preventDefault();
      finish(text, { key: 'Tab', shiftKey });
    } else if (edit.mode === 'replace' && /^Arrow/.test(key) && !shiftKey) {
      event.preventDefault();
      finish(text, { key, shiftKey: false });
    }
  }
  return (
    <input
      ref={field}
      className="plan-field"
      aria-label={label}
      inputMode="decimal"
      autoComplete="off"
      defaultValue={edit.text}
      onKeyDown={onKeyDown}
      onBlur={(event) => {
        if (!isOver.current) finish(event.currentTarget.value, null);
      }}
    />
  );
}
