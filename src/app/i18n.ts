import i18next from 'i18next';
import { initReactI18next } from 'react-i18next';
import { commonTexts } from '../components/texts.ts';
import { accountsTexts } from '../features/accounts/texts.ts';
import { calendarTexts } from '../features/calendar/texts.ts';
import { linesTexts } from '../features/lines/texts.ts';
import { packsTexts } from '../features/packs/texts.ts';
import { planTexts } from '../features/plan/texts.ts';
import { salesTexts } from '../features/sales/texts.ts';
import { settingsTexts } from '../features/settings/texts.ts';
import { trackRecordTexts } from '../features/track-record/texts.ts';
import { waitingTexts } from '../features/waiting/texts.ts';
import { shellTexts } from './texts.ts';

/** One namespace per feature. */
export const englishTexts = {
  common: commonTexts,
  shell: shellTexts,
  accounts: accountsTexts,
  calendar: calendarTexts,
  lines: linesTexts,
  packs: packsTexts,
  plan: planTexts,
  sales: salesTexts,
  settings: settingsTexts,
  'track-record': trackRecordTexts,
  waiting: waitingTexts,
};

export async function startTexts(): Promise<void> {
  await i18next.use(initReactI18next).init({
    lng: 'en',
    fallbackLng: 'en',
    resources: { en: englishTexts },
    ns: Object.keys(englishTexts),
    defaultNS: 'common',
    interpolation: { escapeValue: false },
    returnNull: false,
  });
}
