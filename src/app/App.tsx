import { QueryClientProvider } from '@tanstack/react-query';
import { useEffect } from 'react';
import { createBrowserRouter, RouterProvider } from 'react-router-dom';
import { ToastRegion } from '../components/ToastRegion.tsx';
import { onSignedOut } from '../lib/api.ts';
import { createQueryClient } from '../lib/query-client.ts';
import { routes } from './routes.tsx';

const queryClient = createQueryClient();
const router = createBrowserRouter(routes);

let isLeaving = false;

/** A session that ended anywhere leads to the door, and back to the same page afterwards. What was shown is forgotten once the page is left. */
async function goToSignIn(): Promise<void> {
  const { pathname, search } = router.state.location;
  if (isLeaving || pathname === '/sign-in' || pathname.startsWith('/invitation/')) return;
  isLeaving = true;
  const next = pathname === '/' && search === '' ? '' : `?next=${encodeURIComponent(pathname + search)}`;
  await router.navigate(`/sign-in${next}`, { replace: true });
  queryClient.clear();
  isLeaving = false;
}

export function App() {
  useEffect(() => onSignedOut(() => void goToSignIn()), []);
  return (
    <QueryClientProvider client={queryClient}>
      <RouterProvider router={router} />
      <ToastRegion />
    </QueryClientProvider>
  );
}
