/** The six places of the top bar, in the order of a week's work. */
export const places = [
  { name: 'waiting', path: '/' },
  { name: 'sales', path: '/sales' },
  { name: 'calendar', path: '/calendar' },
  { name: 'plan', path: '/plan' },
  { name: 'track-record', path: '/track-record' },
  { name: 'packs', path: '/packs' },
] as const;

export type PlaceName = (typeof places)[number]['name'];

/** The place that an address belongs to; null for settings and unknown addresses. A line's page belongs to Plan. */
export function placeOf(pathname: string): PlaceName | null {
  if (pathname === '/') return 'waiting';
  if (pathname.startsWith('/lines/')) return 'plan';
  return (
    places.find(({ path }) => path !== '/' && (pathname === path || pathname.startsWith(`${path}/`)))?.name ?? null
  );
}
