export interface Toast {
  id: number;
  tone: 'done' | 'problem';
  text: string;
}

let toasts: readonly Toast[] = [];
let lastId = 0;
const listeners = new Set<() => void>();

function setToasts(next: readonly Toast[]): void {
  toasts = next;
  for (const listener of listeners) listener();
}

export const readToasts = () => toasts;

export function onToasts(listener: () => void): () => void {
  listeners.add(listener);
  return () => listeners.delete(listener);
}

/** Says one sentence at the foot of the page. Good news goes by itself, a problem stays until it is closed. */
export function showToast(toast: Omit<Toast, 'id'>): void {
  lastId += 1;
  const id = lastId;
  setToasts([...toasts.slice(-2), { ...toast, id }]);
  if (toast.tone === 'done') setTimeout(() => closeToast(id), 6000);
}

export function closeToast(id: number): void {
  setToasts(toasts.filter((toast) => toast.id !== id));
}
