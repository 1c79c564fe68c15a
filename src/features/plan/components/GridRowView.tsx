import type { Row } from '@tanstack/react-table';
import { memo, useEffect, useRef, type KeyboardEvent } from 'react';
import { BeyondMark, ForkMark, RingMark } from '../../../components/marks.tsx';
import { formatNumber } from '../../../lib/format.ts';
import type { GridColumn } from '../grid-columns.ts';
import type { CellMarks } from '../line-figures.ts';
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

/** Words of a cell's name, translated once for the whole grid. `weeks` by position of the column. */
export interface CellWords {
  weeks: readonly string[];
  plan: string;
  sold: string;
  unknown: string;
  own: string;
  through: string;
  look: string;
  decision: string;
  outside: string;
  beyond: string;
  pending: string;
  locked: string;
  gap: string;
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
  words: CellWords;
}

export const GridRowView = memo(function GridRowView(props: GridRowViewProps) {
  const { row, index, top, columns, lefts, widths, selectedFirst, selectedLast, editing } = props;
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
      {props.shown.map((at) => {
        const column = columns[at];
        if (!column) return null;
        const isPlan = column.kind === 'plan';
        return (
          <GridCell
            key={column.weekStart}
            row={index}
            column={at}
            left={lefts[at] ?? 0}
            width={widths[at] ?? 0}
            name={name}
            value={row.getValue<number | null>(column.weekStart)}
            isPlan={isPlan}
            isBeforeSeam={column.isBeforeSeam}
            marks={isPlan ? figures.marks[column.index] : undefined}
            isLocked={isPlan && lockedAt[column.index] === true}
            hasGap={!isPlan && (figures.gaps[column.index] ?? 0) > 0}
            isSelected={at >= selectedFirst && at <= selectedLast}
            isActive={props.activeColumn === at}
            isTabStop={props.tabColumn === at}
            editing={editing?.column === at ? editing : null}
            handlers={props.handlers}
            words={props.words}
          />
        );
      })}
    </div>
  );
});

interface GridCellProps {
  row: number;
  column: number;
  left: number;
  width: number;
  name: string;
  value: number | null;
  isPlan: boolean;
  isBeforeSeam: boolean;
  marks: CellMarks | undefined;
  isLocked: boolean;
  hasGap: boolean;
  isSelected: boolean;
  isActive: boolean;
  isTabStop: boolean;
  editing: EditState | null;
  handlers: RowHandlers;
  words: CellWords;
}

const GridCell = memo(function GridCell(props: GridCellProps) {
  const { column, value, isPlan, isLocked, hasGap, marks, words, editing } = props;
  const week = words.weeks[column] ?? '';
  const figure = value === null ? '–' : formatNumber(value);
  let classes = isPlan ? 'plan-cell is-plan' : 'plan-cell';
  if (isLocked) classes += ' is-locked';
  if (props.isActive) classes += ' is-active';
  if (props.isBeforeSeam) classes += ' is-before-seam';
  let label = `${props.name}, ${week}, ${value === null ? words.unknown : `${isPlan ? words.plan : words.sold} ${figure}`}`;
  let figureClass: string | undefined;
  if (hasGap) {
    figureClass = 'gap-figure';
    label += `, ${words.gap}`;
  }
  if (marks) {
    if (marks.overridden !== null) {
      figureClass = marks.overridden === 'own' ? 'over' : 'over-through';
      label += `, ${words[marks.overridden]}`;
    }
    if (marks.isDueAnotherLook) label += `, ${words.look}`;
    if (marks.needsDecision) label += `, ${words.decision}`;
    if (marks.isOutsideRange) label += `, ${words.outside}`;
    if (marks.isBeyondSeen) label += `, ${words.beyond}`;
    if (marks.isPending) {
      classes += ' is-pending';
      label += `, ${words.pending}`;
    }
  }
  if (isLocked) label += `, ${words.locked}`;
  return (
    <div
      role="gridcell"
      aria-colindex={column + 2}
      aria-label={label}
      aria-selected={props.isSelected}
      aria-readonly={!isPlan || isLocked}
      tabIndex={props.isTabStop ? 0 : -1}
      data-row={props.row}
      data-column={column}
      className={classes}
      style={{ left: props.left, width: props.width }}
    >
      {editing ? (
        <CellField edit={editing} label={`${props.name}, ${week}`} handlers={props.handlers} />
      ) : (
        <>
          {figureClass === undefined ? figure : <span className={figureClass}>{figure}</span>}
          {marks?.needsDecision ? (
            <span className="plan-mark">
              <span className="plan-decision">!</span>
            </span>
          ) : marks?.isDueAnotherLook ? (
            <span className="plan-mark">
              <RingMark />
            </span>
          ) : marks?.isOutsideRange ? (
            <span className="plan-mark">
              <ForkMark />
            </span>
          ) : marks?.isBeyondSeen ? (
            <span className="plan-mark">
              <BeyondMark />
            </span>
          ) : null}
        </>
      )}
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
