import { useQuery } from '@tanstack/react-query';
import { type KeyboardEvent, useId, useState } from 'react';
import { useTranslation } from 'react-i18next';
import { useNavigate } from 'react-router-dom';
import { addWeeks } from '../../shared/domain/weeks.ts';
import { calendarQuery } from '../features/calendar/queries.ts';
import { useCategoryInView } from '../lib/categories.ts';
import { formatWeekSpan } from '../lib/format.ts';
import { findByName, type Found } from './find.ts';

/** A combobox over the names of lines, items and promotions; Enter goes to the first. */
export function FindBox() {
  const { t } = useTranslation('shell');
  const { category, categories } = useCategoryInView();
  const navigate = useNavigate();
  const listId = useId();
  const [text, setText] = useState('');
  const [isOpen, setOpen] = useState(false);
  const [active, setActive] = useState(0);
  const calendar = useQuery({
    ...calendarQuery({
      categoryId: category?.id ?? 0,
      firstWeek: category?.lastSalesWeek ? addWeeks(category.lastSalesWeek, -12) : '',
      weeks: 39,
    }),
    enabled: isOpen && typeof category?.lastSalesWeek === 'string',
  });
  const found = findByName(text, categories, calendar.data ?? null);
  const isListShown = isOpen && text.trim() !== '';

  const go = (entry: Found | undefined) => {
    if (!entry) return;
    setText('');
    setOpen(false);
    void navigate(entry.link);
  };
  const pressKey = (event: KeyboardEvent<HTMLInputElement>) => {
    if (event.key === 'ArrowDown' || event.key === 'ArrowUp') {
      event.preventDefault();
      const step = event.key === 'ArrowDown' ? 1 : -1;
      setActive((found.length + active + step) % Math.max(1, found.length));
    } else if (event.key === 'Enter') {
      go(found[active]);
    } else if (event.key === 'Escape') {
      setOpen(false);
      setText('');
    }
  };
  const explain = (entry: Found) => {
    switch (entry.kind) {
      case 'line':
        return t('find.line', { category: entry.categoryName });
      case 'item':
        return t('find.item', { line: entry.lineName });
      case 'promotion':
        return t('find.promotion', { weeks: formatWeekSpan(entry.firstWeek, entry.lastWeek, t('common:to')) });
    }
  };

  return (
    <div className="relative ml-auto flex items-center gap-2">
      <label htmlFor={`${listId}-box`} className="font-[560] text-soft">
        {t('find.label')}
      </label>
      <input
        id={`${listId}-box`}
        type="text"
        role="combobox"
        autoComplete="off"
        aria-expanded={isListShown}
        aria-controls={`${listId}-list`}
        aria-autocomplete="list"
        aria-activedescendant={isListShown && found[active] ? `${listId}-${active}` : undefined}
        placeholder={t('find.placeholder')}
        value={text}
        onFocus={() => setOpen(true)}
        onBlur={() => setOpen(false)}
        onChange={(event) => {
          setText(event.target.value);
          setActive(0);
          setOpen(true);
        }}
        onKeyDown={pressKey}
        className="h-[26px] w-[150px] border-b-[1.5px] border-rule bg-sheet px-2 text-small min-[1440px]:w-[196px]"
      />
      <div
        className={`absolute top-[34px] right-0 z-40 w-[380px] border border-ink bg-sheet ${isListShown ? '' : 'hidden'}`}
      >
        <ul id={`${listId}-list`} role="listbox" aria-label={t('find.results')} className="py-1">
          {found.map((entry, index) => (
            <li
              key={`${entry.kind}-${entry.link}-${entry.name}`}
              id={`${listId}-${index}`}
              role="option"
              aria-selected={index === active}
              className={`flex cursor-pointer items-baseline justify-between gap-4 px-3 py-1 ${index === active ? 'bg-moss-tint' : ''}`}
              onMouseDown={(event) => event.preventDefault()}
              onMouseEnter={() => setActive(index)}
              onClick={() => go(entry)}
            >
              <span className="font-[560]">{entry.name}</span>
              <span className="text-small text-soft">{explain(entry)}</span>
            </li>
          ))}
        </ul>
        {found.length === 0 && (
          <p role="status" className="px-3 pb-2 text-small text-soft">
            {t('find.nothing')}
          </p>
        )}
      </div>
    </div>
  );
}
