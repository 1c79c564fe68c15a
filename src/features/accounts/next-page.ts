/** Where to go after signing in: a path of this site only, never another host. */
export function readNextPage(search: URLSearchParams): string {
  const next = search.get('next') ?? '/';
  return /^\/(?![/\\])/.test(next) ? next : '/';
}
