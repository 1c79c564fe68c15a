import { weekLabel } from '../../../shared/domain/weeks.ts';

const LONGEST_SHEET_NAME = 31;
/** `History` is kept back by spreadsheet programs for themselves. */
const RESERVED_SHEET_NAMES = ['history'];

/**
 * Sheet names for the given titles: valid (at most 31 characters, none of `[ ] : * ? / \`, no apostrophe), different from each other
 * and from those taken, whatever the case.
 */
export function nameSheets(titles: readonly string[], taken: readonly string[] = []): string[] {
  const used = new Set([...taken.map((name) => name.toLowerCase()), ...RESERVED_SHEET_NAMES]);
  return titles.map((title) => {
    const plain =
      title
        .replace(/'/g, '’')
        // eslint-disable-next-line no-control-regex -- control characters are exactly what must not get into a sheet's name
        .replace(/[[\]:*?/\\\u0000-\u001f\u007f]/g, ' ')
        .replace(/\s+/g, ' ')
        .trim() || 'Line';
    for (let attempt = 1; ; attempt += 1) {
      const suffix = attempt === 1 ? '' : ` ${attempt}`;
      const name = cutText(plain, LONGEST_SHEET_NAME - suffix.length) + suffix;
      if (used.has(name.toLowerCase())) continue;
      used.add(name.toLowerCase());
      return name;
    }
  });
}

/** `fairweek-pack-<category>-<period>-<number>.xlsx`; the period is `2026W49` or `2026W49-2027W08`. */
export function namePackFile(pack: { category: string; weekStarts: readonly string[]; number: number }): string {
  const [first, last] = [pack.weekStarts[0], pack.weekStarts.at(-1)].map((week) =>
    week ? weekLabel(week).replace('-', '') : '',
  );
  const period = first === last ? first : `${first}-${last}`;
  return `fairweek-pack-${slugify(pack.category)}-${period}-${pack.number}.xlsx`;
}

function slugify(text: string): string {
  const slug = text
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replace(/[^\p{L}\p{N}]+/gu, '-')
    .replace(/^-|-$/g, '');
  return slug.slice(0, 60) || 'category';
}

/** At most so many UTF-16 units, no letter cut in half. */
function cutText(text: string, length: number): string {
  if (text.length <= length) return text;
  let cut = '';
  for (const { segment } of new Intl.Segmenter('en').segment(text)) {
    if (cut.length + segment.length > length) break;
    cut += segment;
  }
  return cut.trimEnd();
}
