import type { UnknownNames } from '../../../shared/contracts/sales.ts';

/** The range as it stands before a file is read. */
export interface RangeSnapshot {
  categories: readonly { id: number; name: string }[];
  lines: readonly { id: number; name: string; categoryId: number }[];
  /** lineId and categoryId: where the item is now; null if in no line. */
  items: readonly { id: number; code: string; name: string; lineId: number | null; categoryId: number | null }[];
  locations: readonly { id: number; code: string; name: string }[];
}

/** Names in one row of a file. */
export interface NamedRow {
  category?: string;
  line?: string;
  item: string;
  itemName?: string;
  location: string;
}

export interface ResolverChoices {
  /** Categories that the person may import into; null = all. */
  permittedCategories: readonly number[] | null;
  /** Category and line of rows whose items are new and whose file names none. */
  categoryId: number | null;
  lineId: number | null;
  newLineName: string | null;
  /** New items and locations can be made; a calendar can't make any. */
  mayCreate: boolean;
}

/** An item of the file; id null = not known yet. */
export interface FileItem {
  id: number | null;
  code: string;
  name: string;
  categoryId: number | null;
  lineId: number | null;
  /** Name of the line to be made, where lineId is null. */
  lineName: string | null;
}

export interface FileLocation {
  id: number | null;
  code: string;
}

export interface RowRefusal {
  kind:
    | 'category-not-yours'
    | 'unknown-category'
    | 'unknown-item'
    | 'unknown-location'
    | 'ambiguous-item'
    | 'item-in-no-line';
  meaning: 'category' | 'item' | 'location';
  detail: string;
}

export interface RowNotice {
  kind: 'item-in-other-line';
  detail: string;
}

export type Resolution = { item: number; location: number; notice: RowNotice | null } | RowRefusal;

/** What a company that sends totals has for a location; it is made without asking. */
export const wholeMarket = 'all';

const fold = (text: string) => text.trim().toLowerCase();

/**
 * Finds what the names in a file's rows stand for: items by code, then by name; locations likewise; lines and categories by name; upper and lower
 * case alike. Each different item and location of the file gets a position, known or new. Permission is checked by the category of the row.
 */
export class RangeResolver {
  readonly items: FileItem[] = [];
  readonly locations: FileLocation[] = [];
  /** The same item or location went by several texts, so that rows may repeat a key. */
  hasAliases = false;

  private readonly choices: ResolverChoices;
  private readonly permitted: ReadonlySet<number> | null;
  private readonly categoryByName: Map<string, number>;
  private readonly categoryNames: Map<number, string>;
  private readonly linesByName = new Map<string, { id: number; categoryId: number }[]>();
  private readonly lineNames = new Map<number, string>();
  private readonly lineCategory = new Map<number, number>();
  private readonly itemByCode = new Map<string, RangeSnapshot['items'][number]>();
  private readonly itemsByName = new Map<string, RangeSnapshot['items'][number][]>();
  private readonly locationByCode = new Map<string, number>();
  private readonly locationsByName = new Map<string, number[]>();
  private readonly itemTexts = new Map<string, number | RowRefusal>();
  private readonly itemPositions = new Map<string, number>();
  private readonly locationTexts = new Map<string, number | RowRefusal>();
  private readonly locationPositions = new Map<string, number>();
  private readonly unknownCategories = new Map<string, string>();
  private readonly noticedItems = new Set<number>();
  /** New items whose category the file doesn't tell, with the line it names. */
  private readonly undecided = new Map<FileItem, string | undefined>();

  constructor(range: RangeSnapshot, choices: ResolverChoices) {
    this.choices = choices;
    this.permitted = choices.permittedCategories === null ? null : new Set(choices.permittedCategories);
    this.categoryByName = new Map(range.categories.map(({ id, name }) => [fold(name), id]));
    this.categoryNames = new Map(range.categories.map(({ id, name }) => [id, name]));
    for (const line of range.lines) {
      push(this.linesByName, fold(line.name), line);
      this.lineNames.set(line.id, line.name);
      this.lineCategory.set(line.id, line.categoryId);
    }
    for (const item of range.items) {
      this.itemByCode.set(fold(item.code), item);
      push(this.itemsByName, fold(item.name), item);
    }
    for (const location of range.locations) {
      this.locationByCode.set(fold(location.code), location.id);
      push(this.locationsByName, fold(location.name), location.id);
    }
  }

  resolve(row: NamedRow): Resolution {
    const itemKey = `${row.item}\u0000${row.category ?? ''}\u0000${row.line ?? ''}`;
    let item = this.itemTexts.get(itemKey);
    if (item === undefined) {
      item = this.findItem(row);
      this.itemTexts.set(itemKey, item);
    }
    if (typeof item !== 'number') return item;
    let location = this.locationTexts.get(row.location);
    if (location === undefined) {
      location = this.findLocation(row.location);
      this.locationTexts.set(row.location, location);
    }
    if (typeof location !== 'number') return location;
    this.takeItemName(item, row.itemName);
    return { item, location, notice: this.noticeOtherLine(item, row) };
  }

  /** To be called after the last row: new items of unknown category go where all known items of the file are, if that is one category. */
  settle(): void {
    const known = new Set(this.items.flatMap(({ id, categoryId }) => (id === null ? [] : [categoryId])));
    const [only] = known;
    if (known.size !== 1 || only === undefined || only === null) return;
    for (const [item, line] of this.undecided)
      Object.assign(item, { categoryId: only }, this.chooseLine({ line }, only));
    this.undecided.clear();
  }

  /** What must be chosen before the new items can be made; null = nothing. */
  get missingChoice(): 'category' | 'line' | null {
    const fresh = this.items.filter(({ id }) => id === null);
    if (fresh.some(({ categoryId }) => categoryId === null)) return 'category';
    return fresh.some(({ lineId, lineName }) => lineId === null && lineName === null) ? 'line' : null;
  }

  /** What the file names and nobody knows yet. */
  listUnknown(): UnknownNames {
    const lines = new Map<string, { category: string; line: string }>();
    for (const { id, lineId, lineName, categoryId } of this.items) {
      if (id !== null || lineId !== null || lineName === null || categoryId === null) continue;
      const category = this.categoryNames.get(categoryId) ?? '';
      lines.set(`${categoryId}|${fold(lineName)}`, { category, line: lineName });
    }
    return {
      categories: [...this.unknownCategories.values()],
      lines: [...lines.values()],
      items: this.items
        .filter(({ id }) => id === null)
        .map(({ code, name, lineId, lineName }) => ({
          item: code,
          name: name === code ? null : name,
          line: lineId === null ? lineName : (this.lineNames.get(lineId) ?? null),
        })),
      locations: this.locations
        .filter(({ id, code }) => id === null && fold(code) !== wholeMarket)
        .map(({ code }) => code),
    };
  }

  private findItem(row: NamedRow): number | RowRefusal {
    const key = fold(row.item);
    const named = this.itemsByName.get(key) ?? [];
    const byCode = this.itemByCode.get(key);
    if (!byCode && named.length > 1) {
      const codes = named.map(({ code }) => code).join(', ');
      return refuse('ambiguous-item', 'item', `“${row.item}” is the name of several items (${codes}). Use the code.`);
    }
    const known = byCode ?? named[0];
    if (known) {
      if (known.categoryId === null) {
        const detail = `“${row.item}” is in no product line at present. Put it into one, then read the file again.`;
        return refuse('item-in-no-line', 'item', detail);
      }
      if (!this.isPermitted(known.categoryId)) return refuseForeignCategory(`“${row.item}”`);
      return this.place(this.itemPositions, this.items, `#${known.id}`, {
        id: known.id,
        code: known.code,
        name: known.name,
        categoryId: known.categoryId,
        lineId: known.lineId,
        lineName: null,
      });
    }
    return this.findNewItem(row, key);
  }

  private findNewItem(row: NamedRow, key: string): number | RowRefusal {
    if (row.category !== undefined && !this.categoryByName.has(fold(row.category))) {
      this.unknownCategories.set(fold(row.category), row.category);
      const detail = `There is no category “${row.category}”. An administrator can create it; then read the file again.`;
      return refuse('unknown-category', 'category', detail);
    }
    if (!this.choices.mayCreate) {
      const detail = `“${row.item}” isn’t known. Import its sales first, or correct the code.`;
      return refuse('unknown-item', 'item', detail);
    }
    const categoryId = this.chooseCategory(row);
    if (categoryId !== null && !this.isPermitted(categoryId)) {
      return refuseForeignCategory(row.category === undefined ? 'The chosen category' : `“${row.category}”`);
    }
    const line = this.chooseLine(row, categoryId);
    const item: FileItem = { id: null, code: row.item, name: row.itemName ?? row.item, categoryId, ...line };
    if (categoryId === null) this.undecided.set(item, row.line);
    return this.place(this.itemPositions, this.items, key, item);
  }

  /** By the file's category, else by a line name that only one permitted category has, else by the choice made for the file. */
  private chooseCategory(row: NamedRow): number | null {
    if (row.category !== undefined) return this.categoryByName.get(fold(row.category)) ?? null;
    if (row.line !== undefined) {
      const permitted = (this.linesByName.get(fold(row.line)) ?? []).filter(({ categoryId }) =>
        this.isPermitted(categoryId),
      );
      const chosen = permitted.find(({ categoryId }) => categoryId === this.choices.categoryId);
      if (chosen ?? (permitted.length === 1 ? permitted[0] : undefined))
        return (chosen ?? permitted[0])?.categoryId ?? null;
    }
    return this.choices.categoryId;
  }

  private chooseLine(
    row: { line?: string },
    categoryId: number | null,
  ): { lineId: number | null; lineName: string | null } {
    if (row.line !== undefined) {
      const known = this.linesByName.get(fold(row.line))?.find((line) => line.categoryId === categoryId);
      return known ? { lineId: known.id, lineName: null } : { lineId: null, lineName: row.line };
    }
    const { lineId, newLineName } = this.choices;
    if (lineId !== null && this.lineCategory.get(lineId) === categoryId) return { lineId, lineName: null };
    if (newLineName === null) return { lineId: null, lineName: null };
    const known = this.linesByName.get(fold(newLineName))?.find((line) => line.categoryId === categoryId);
    return known ? { lineId: known.id, lineName: null } : { lineId: null, lineName: newLineName };
  }

  private findLocation(text: string): number | RowRefusal {
    const key = fold(text);
    const byCode = this.locationByCode.get(key);
    const named = this.locationsByName.get(key) ?? [];
    const id = byCode ?? (named.length === 1 ? named[0] : undefined);
    if (id !== undefined) return this.place(this.locationPositions, this.locations, `#${id}`, { id, code: text });
    if (named.length > 1 || (!this.choices.mayCreate && key !== wholeMarket)) {
      const detail =
        named.length > 1
          ? `“${text}” is the name of several locations. Use the code.`
          : `“${text}” isn’t known. Import its sales first, or correct the code.`;
      return refuse('unknown-location', 'location', detail);
    }
    return this.place(this.locationPositions, this.locations, key, { id: null, code: text });
  }

  private place<Entry>(positions: Map<string, number>, entries: Entry[], key: string, entry: Entry): number {
    const known = positions.get(key);
    if (known !== undefined) {
      this.hasAliases = true;
      return known;
    }
    entries.push(entry);
    positions.set(key, entries.length - 1);
    return entries.length - 1;
  }

  /** A later row may bring the name that the first one lacked. */
  private takeItemName(position: number, name: string | undefined): void {
    const item = this.items[position];
    if (name !== undefined && item?.id === null && item.name === item.code) item.name = name;
  }

  private noticeOtherLine(position: number, row: NamedRow): RowNotice | null {
    const item = this.items[position];
    if (
      !item ||
      item.id === null ||
      row.line === undefined ||
      item.lineId === null ||
      this.noticedItems.has(position)
    ) {
      return null;
    }
    const own = this.lineNames.get(item.lineId) ?? '';
    if (fold(own) === fold(row.line)) return null;
    this.noticedItems.add(position);
    const detail = `${item.code} is in the line “${own}”; the file says “${row.line}”. Its sales are taken, its line stays.`;
    return { kind: 'item-in-other-line', detail };
  }

  private isPermitted(categoryId: number): boolean {
    return this.permitted === null || this.permitted.has(categoryId);
  }
}

function refuse(kind: RowRefusal['kind'], meaning: RowRefusal['meaning'], detail: string): RowRefusal {
  return { kind, meaning, detail };
}

function refuseForeignCategory(what: string): RowRefusal {
  const detail = `${what} belongs to a category that you don’t import for. Ask somebody who is assigned to it, or a data steward.`;
  return refuse('category-not-yours', 'category', detail);
}

function push<Value>(map: Map<string, Value[]>, key: string, value: Value): void {
  const list = map.get(key);
  if (list) list.push(value);
  else map.set(key, [value]);
}
