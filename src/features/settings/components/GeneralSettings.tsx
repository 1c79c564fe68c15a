import { useQuery } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { useTranslation } from 'react-i18next';
import { Settings } from '../../../../shared/contracts/settings.ts';
import { Button } from '../../../components/Button.tsx';
import { TextField } from '../../../components/fields.tsx';
import { PageHead } from '../../../components/Page.tsx';
import { ProblemNote, QueryStates } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { formatNumber, formatWeekday, parseLocalNumber } from '../../../lib/format.ts';
import { settingsQuery } from '../../../lib/settings.ts';
import { ruleOf } from '../../../lib/validate.ts';
import { useChangeSettings } from '../queries.ts';

export function GeneralSettings({ isAdministrator }: { isAdministrator: boolean }) {
  const { t } = useTranslation('settings');
  const settings = useQuery(settingsQuery);
  return (
    <>
      <PageHead title={t('part.general')} lead={t(isAdministrator ? 'general.lead' : 'adminOnly')} />
      <div className="mt-5">
        <QueryStates query={settings} loading={t('loading')}>
          {(answer) => <SettingsForm settings={answer} isAdministrator={isAdministrator} />}
        </QueryStates>
      </div>
    </>
  );
}

interface Values {
  companyName: string;
  holidayCountry: string;
  currency: string;
  horizonWeeks: string;
  noteThreshold: string;
  lookThreshold: string;
}

const toValues = (settings: Settings): Values => ({
  companyName: settings.companyName,
  holidayCountry: settings.holidayCountry,
  currency: settings.currency,
  horizonWeeks: String(settings.horizonWeeks),
  noteThreshold: formatNumber(settings.noteThreshold * 100, 1),
  lookThreshold: formatNumber(settings.lookThreshold * 100, 1),
});

function SettingsForm({ settings, isAdministrator }: { settings: Settings; isAdministrator: boolean }) {
  const { t } = useTranslation('settings');
  const change = useChangeSettings();
  const { register, handleSubmit, formState, reset } = useForm<Values>({ defaultValues: toValues(settings) });
  const { errors, isDirty } = formState;
  const isPercent = (text: string) => {
    const value = parseLocalNumber(text);
    return (value !== null && value >= 0 && value <= 1000) || t('general.thresholdWrong');
  };
  const submit = handleSubmit(async (values) => {
    try {
      const saved = await change.mutateAsync({
        companyName: values.companyName.trim(),
        holidayCountry: values.holidayCountry,
        currency: values.currency,
        horizonWeeks: Number(values.horizonWeeks),
        noteThreshold: (parseLocalNumber(values.noteThreshold) ?? 0) / 100,
        lookThreshold: (parseLocalNumber(values.lookThreshold) ?? 0) / 100,
      });
      reset(toValues(saved));
      showToast({ tone: 'done', text: t('general.saved') });
    } catch {
      // Shown beside the button.
    }
  });
  return (
    <form onSubmit={submit} noValidate>
      <fieldset disabled={!isAdministrator} className="grid max-w-[720px] grid-cols-2 gap-x-8 gap-y-5">
        <TextField
          label={t('general.companyName')}
          className="col-span-2"
          error={errors.companyName?.message}
          {...register('companyName', {
            validate: (text) => text.trim() !== '' || t('general.companyMissing'),
          })}
        />
        <TextField
          label={t('general.holidayCountry')}
          hint={t('general.holidayHint')}
          error={errors.holidayCountry?.message}
          maxLength={2}
          {...register('holidayCountry', {
            setValueAs: (text: string) => text.trim().toUpperCase(),
            validate: ruleOf(Settings.shape.holidayCountry, t('general.holidayWrong')),
          })}
        />
        <TextField
          label={t('general.currency')}
          hint={t('general.currencyHint')}
          error={errors.currency?.message}
          maxLength={3}
          {...register('currency', {
            setValueAs: (text: string) => text.trim().toUpperCase(),
            validate: ruleOf(Settings.shape.currency, t('general.currencyWrong')),
          })}
        />
        <TextField
          label={t('general.horizon')}
          hint={t('general.horizonHint')}
          inputMode="numeric"
          error={errors.horizonWeeks?.message}
          {...register('horizonWeeks', {
            validate: (text) =>
              Settings.shape.horizonWeeks.safeParse(Number(text)).success || t('general.horizonWrong'),
          })}
        />
        <TextField
          label={t('general.weekday')}
          hint={t('general.weekdayHint')}
          readOnly
          disabled
          value={settings.firstWeekday === null ? t('general.weekdayOpen') : formatWeekday(settings.firstWeekday)}
        />
        <TextField
          label={t('general.noteThreshold')}
          hint={t('general.noteHint')}
          inputMode="decimal"
          error={errors.noteThreshold?.message}
          {...register('noteThreshold', { validate: isPercent })}
        />
        <TextField
          label={t('general.lookThreshold')}
          hint={t('general.lookHint')}
          inputMode="decimal"
          error={errors.lookThreshold?.message}
          {...register('lookThreshold', { validate: isPercent })}
        />
      </fieldset>
      {isAdministrator && (
        <div className="mt-6 grid gap-3">
          <ProblemNote error={change.error} />
          <div className="flex items-center gap-4">
            <Button type="submit" disabled={!isDirty || change.isPending}>
              {t('general.save')}
            </Button>
            {!isDirty && <span className="text-soft">{t('general.unchanged')}</span>}
          </div>
        </div>
      )}
    </form>
  );
}
