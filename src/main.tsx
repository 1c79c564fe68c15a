import './lib/no-eval.ts';
import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { App } from './app/App.tsx';
import { startTexts } from './app/i18n.ts';
import './app/theme.css';
import { startTheme } from './lib/theme.ts';

startTheme();
await startTexts();

const root = document.getElementById('root');
if (!root) throw new Error('The page has no #root to show Fairweek in.');
createRoot(root).render(
  <StrictMode>
    <App />
  </StrictMode>,
);
