import type { RouteObject } from 'react-router-dom';
import { PageError } from './PageError.tsx';
import { Shell } from './Shell.tsx';
import { Start } from './Start.tsx';

/** One lazy file per address; each exports `Component`. */
export const routes: RouteObject[] = [
  {
    HydrateFallback: Start,
    ErrorBoundary: PageError,
    children: [
      { path: '/sign-in', lazy: () => import('./routes/sign-in.tsx') },
      { path: '/invitation/:token', lazy: () => import('./routes/invitation.tsx') },
      {
        Component: Shell,
        children: [
          {
            ErrorBoundary: PageError,
            children: [
              { index: true, lazy: () => import('./routes/waiting.tsx') },
              { path: '/sales', lazy: () => import('./routes/sales.tsx') },
              { path: '/sales/imports/:importId', lazy: () => import('./routes/sales-import.tsx') },
              { path: '/calendar', lazy: () => import('./routes/calendar.tsx') },
              { path: '/plan', lazy: () => import('./routes/plan-category.tsx') },
              { path: '/plan/:lineId', lazy: () => import('./routes/plan-line.tsx') },
              { path: '/track-record', lazy: () => import('./routes/track-record.tsx') },
              { path: '/packs', lazy: () => import('./routes/packs.tsx') },
              { path: '/lines/:lineId', lazy: () => import('./routes/line.tsx') },
              { path: '/settings', lazy: () => import('./routes/settings.tsx') },
              { path: '/settings/:part', lazy: () => import('./routes/settings.tsx') },
              { path: '*', lazy: () => import('./routes/not-found.tsx') },
            ],
          },
        ],
      },
    ],
  },
];
