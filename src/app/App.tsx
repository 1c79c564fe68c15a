import { QueryClientProvider } from '@tanstack/react-query';
import { useEffect } from 'react';
import { createBrowserRouter, RouterProvider } from 'react-router-dom';
import { ToastRegion } from '../components/ToastRegion.tsx';
import { onSignedOut } from '../lib/api.ts';
import { createQueryClient } from '../lib/query-client.ts';
import { routes } from './routes.tsx';

const queryClient = createQueryClient();
const router = createBrowserRouter(routes);

/** A session that ended anywhere leads to the door, and back to the same page afterwards. */
function goToSignIn(): void {
  const { pathname, search } = router.state.location;
  if (pathname === '/sign-in' || pathname.startsWith('/invitation/')) return;
  queryClient.clear();
  const next = pathname === '/' && search === '' ? '' : `?next=${encodeURIComponent(pathname + search)}`;
  void router.navigate(`/sign-in${next}`, { replace: true });
}

export function App() {
  useEffect(() => onSignedOut(goToSignIn), []);
  return (
    <QueryClientProvider client={queryClient}>
      <RouterProvider router={router} />
      <ToastRegion />
    </QueryClientProvider>
  );
}
