import type { DemoCategory, DemoLine } from '../../../seed-data/company.ts';
import { categories, firstWeek, historyWeeks, locations } from '../../../seed-data/company.ts';
import { generateCalendar, generateSales, type CalendarRow, type SalesRow } from '../../../seed-data/generate-sales.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';

/** One location: a line of 12 items × 156 weeks. */
const at = locations.slice(0, 1);

/** `lines` lines of 12 (or other) items, which sell after the patterns of the demo company's lines in turn. */
export function inventCategory(name: string, lines: number, itemsPerLine = 12): DemoCategory {
  const patterns = categories.flatMap((category) => category.lines);
  return {
    name,
    slug: name.toLowerCase().replaceAll(' ', '-'),
    lines: Array.from({ length: lines }, (_, index): DemoLine => {
      const pattern = patterns[index % patterns.length]!;
      const number = String(index + 1).padStart(3, '0');
      return {
        name: `${name} line ${number}`,
        effects: pattern.effects,
        items: Array.from({ length: itemsPerLine }, (_, item) => {
          const model = pattern.items[item % pattern.items.length]!;
          return {
            code: `${name}-${number}-${String(item + 1).padStart(2, '0')}`,
            name: `${name} ${number} item ${item + 1}`,
            price: model.price + item / 10,
            units: model.units / (1 + item),
          };
        }),
      };
    }),
  };
}

/** Sales of the whole history, and the calendar of the weeks after it, line by line. */
export function* tellLines(category: DemoCategory): Generator<{
  line: DemoLine;
  sales: SalesRow[];
  calendar: CalendarRow[];
}> {
  for (const line of category.lines) {
    const alone = { ...category, lines: [line] };
    yield { line, sales: generateSales(alone, at), calendar: generateCalendar(alone, historyWeeks, at) };
  }
}

export const seam = addWeeks(firstWeek, historyWeeks);
export const locationCode = at[0]!.code;
