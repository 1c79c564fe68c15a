import { LoadingState } from '../components/states.tsx';

/** Before the first page is there. */
export function Start() {
  return (
    <main className="px-6 pt-10">
      <LoadingState />
    </main>
  );
}
