import { useTranslation } from 'react-i18next';
import {
  importKinds,
  type ImportDetail,
  type ImportKind,
  type ImportMapping,
} from '../../../../shared/contracts/sales.ts';
import { Checkbox, Select, TextField } from '../../../components/fields.tsx';
import { useCategories } from '../../../lib/categories.ts';
import { formatWeekday } from '../../../lib/format.ts';
import { useMay } from '../../../lib/session.ts';

const newLine = 'new';

/** What isn't in a column: sheet, header row, weeks, numbers, and category and line where the file names none. */
export function ReadingOptions({
  detail,
  mapping,
  isOpen,
  onChange,
}: {
  detail: ImportDetail;
  mapping: ImportMapping;
  isOpen: boolean;
  onChange: (mapping: ImportMapping) => void;
}) {
  const { t } = useTranslation('sales');
  const { firstWeekday } = useCategories();
  const set = (change: Partial<ImportMapping>) => onChange({ ...mapping, ...change });
  const has = (meaning: string) => mapping.columns.some((column) => column.meaning === meaning);
  return (
    <div className="grid grid-cols-2 gap-x-6 gap-y-3 min-[1280px]:grid-cols-3">
      <Select
        label={t('reading.kind')}
        disabled={!isOpen}
        value={mapping.kind}
        onChange={(event) => set({ kind: event.target.value as ImportKind })}
      >
        {importKinds.map((kind) => (
          <option key={kind} value={kind}>
            {t(`kind.${kind}`)}
          </option>
        ))}
      </Select>
      {detail.sheets.length > 1 && (
        <Select
          label={t('reading.sheet')}
          disabled={!isOpen}
          value={mapping.sheet ?? ''}
          onChange={(event) => set({ sheet: event.target.value })}
        >
          {detail.sheets.map(({ name, isHidden }) => (
            <option key={name} value={name}>
              {isHidden ? t('reading.sheetHidden', { name }) : name}
            </option>
          ))}
        </Select>
      )}
      <TextField
        label={t('reading.headerRow')}
        type="number"
        min={1}
        max={100}
        disabled={!isOpen}
        value={mapping.headerRow}
        onChange={(event) => {
          const row = event.target.valueAsNumber;
          if (Number.isInteger(row) && row > 0) set({ headerRow: row });
        }}
      />
      <Select
        label={t('reading.weekDate')}
        disabled={!isOpen}
        value={mapping.weekDateIs}
        onChange={(event) => set({ weekDateIs: event.target.value as ImportMapping['weekDateIs'] })}
      >
        <option value="first-day">{t('reading.first-day')}</option>
        <option value="last-day">{t('reading.last-day')}</option>
      </Select>
      <Select
        label={t('reading.weekday')}
        hint={firstWeekday === null ? undefined : t('reading.weekdayFixed')}
        disabled={!isOpen || firstWeekday !== null}
        value={mapping.firstWeekday}
        onChange={(event) => set({ firstWeekday: Number(event.target.value) })}
      >
        {[1, 2, 3, 4, 5, 6, 0].map((weekday) => (
          <option key={weekday} value={weekday}>
            {formatWeekday(weekday)}
          </option>
        ))}
      </Select>
      <Select
        label={t('reading.decimal')}
        disabled={!isOpen}
        value={mapping.decimalMark}
        onChange={(event) => set({ decimalMark: event.target.value as ImportMapping['decimalMark'] })}
      >
        <option value=".">{t('reading.decimalPoint')}</option>
        <option value=",">{t('reading.decimalComma')}</option>
      </Select>
      {!has('category') && <CategoryChoice mapping={mapping} isOpen={isOpen} onChange={onChange} />}
      {!has('line') && <LineChoice mapping={mapping} isOpen={isOpen} onChange={onChange} />}
      <Checkbox
        className="col-span-full"
        label={t('reading.vat')}
        disabled={!isOpen}
        checked={mapping.valueIncludesVat}
        onChange={(event) => set({ valueIncludesVat: event.target.checked })}
      />
    </div>
  );
}

interface ChoiceProps {
  mapping: ImportMapping;
  isOpen: boolean;
  onChange: (mapping: ImportMapping) => void;
}

function CategoryChoice({ mapping, isOpen, onChange }: ChoiceProps) {
  const { t } = useTranslation('sales');
  const { categories } = useCategories();
  const may = useMay();
  return (
    <Select
      label={t('reading.category')}
      disabled={!isOpen}
      value={mapping.categoryId ?? ''}
      onChange={(event) =>
        onChange({
          ...mapping,
          categoryId: event.target.value === '' ? null : Number(event.target.value),
          lineId: null,
          newLineName: null,
        })
      }
    >
      <option value="">{t('reading.byItems')}</option>
      {categories
        .filter(({ id }) => may('import-sales', id) || id === mapping.categoryId)
        .map(({ id, name }) => (
          <option key={id} value={id}>
            {name}
          </option>
        ))}
    </Select>
  );
}

function LineChoice({ mapping, isOpen, onChange }: ChoiceProps) {
  const { t } = useTranslation('sales');
  const { categories } = useCategories();
  const lines = categories.find(({ id }) => id === mapping.categoryId)?.lines ?? [];
  const value = mapping.newLineName !== null ? newLine : (mapping.lineId ?? '');
  return (
    <>
      <Select
        label={t('reading.line')}
        disabled={!isOpen}
        value={value}
        onChange={(event) => {
          const choice = event.target.value;
          onChange({
            ...mapping,
            lineId: choice === '' || choice === newLine ? null : Number(choice),
            newLineName: choice === newLine ? '' : null,
          });
        }}
      >
        <option value="">{t('reading.choose')}</option>
        {lines.map(({ id, name }) => (
          <option key={id} value={id}>
            {name}
          </option>
        ))}
        <option value={newLine}>{t('reading.newLine')}</option>
      </Select>
      {mapping.newLineName !== null && (
        <TextField
          label={t('reading.newLineName')}
          disabled={!isOpen}
          maxLength={200}
          value={mapping.newLineName}
          onChange={(event) => onChange({ ...mapping, newLineName: event.target.value })}
        />
      )}
    </>
  );
}
