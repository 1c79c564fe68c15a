import type { CalendarView } from '../../shared/contracts/calendar.ts';
import type { Category } from '../../shared/contracts/lines.ts';

export type Found =
  | { kind: 'line'; name: string; categoryName: string; link: string }
  | { kind: 'item'; name: string; lineName: string; link: string }
  | { kind: 'promotion'; name: string; firstWeek: string; lastWeek: string; link: string };

const fold = (text: string) => text.normalize('NFD').replace(/\p{M}/gu, '').toLowerCase();

/** Every word asked for begins a word of the name; 0 = first word fits, 1 = a later one. */
function rank(name: string, asked: string[]): number | null {
  const words = fold(name).split(/[\s,./-]+/);
  if (!asked.every((word) => words.some((other) => other.startsWith(word)))) return null;
  return asked[0] !== undefined && words[0]?.startsWith(asked[0]) ? 0 : 1;
}

/** Lines of every category, items and promotions of the category in view whose names fit; best first, at most `most`. */
export function findByName(
  text: string,
  categories: readonly Category[],
  calendar: CalendarView | null,
  most = 10,
): Found[] {
  const asked = fold(text).split(/\s+/).filter(Boolean);
  if (asked.length === 0) return [];
  const candidates: Found[] = [];
  for (const category of categories) {
    for (const line of category.lines) {
      candidates.push({
        kind: 'line',
        name: line.name,
        categoryName: category.name,
        link: `/plan/${line.id}?category=${category.id}`,
      });
    }
  }
  if (calendar) {
    for (const line of calendar.lines) {
      for (const item of line.items) {
        candidates.push({
          kind: 'item',
          name: item.name,
          lineName: line.name,
          link: `/plan/${line.id}?category=${calendar.category.id}&item=${item.id}`,
        });
      }
    }
    for (const promotion of calendar.promotions) {
      candidates.push({
        kind: 'promotion',
        name: promotion.name,
        firstWeek: promotion.firstWeek,
        lastWeek: promotion.lastWeek,
        link: `/calendar?category=${calendar.category.id}&from=${promotion.firstWeek}`,
      });
    }
  }
  return candidates
    .map((found) => ({ found, rank: rank(found.name, asked) }))
    .filter((entry): entry is { found: Found; rank: number } => entry.rank !== null)
    .sort((a, b) => a.rank - b.rank || a.found.name.localeCompare(b.found.name))
    .slice(0, most)
    .map(({ found }) => found);
}
