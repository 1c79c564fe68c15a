import type { ColumnMeaning } from '../../../shared/domain/column-meanings.ts';

export interface NameMatch {
  meaning: ColumnMeaning;
  mechanic?: string;
  /** 0…1, from the name alone. */
  confidence: number;
}

/** Column names of the canonical file and its companions. */
const CANONICAL = new Map<string, ColumnMeaning>([
  ['week', 'week'],
  ['category', 'category'],
  ['line', 'line'],
  ['item', 'item'],
  ['item_name', 'itemName'],
  ['location', 'location'],
  ['units', 'units'],
  ['net_value', 'netValue'],
  ['price', 'price'],
  ['regular_price', 'regularPrice'],
  ['depth', 'depth'],
  ['feature', 'feature'],
  ['display', 'display'],
  ['gap', 'gap'],
  ['days_open', 'daysOpen'],
  ['promotion', 'promotionName'],
]);

/** Words of the trade: whole names that say it, and words that hint at it inside a longer name. */
const WORDS: { meaning: ColumnMeaning; whole: string; within?: RegExp }[] = [
  {
    meaning: 'week',
    whole:
      'week|weeks|wk|week start|week starting|week start date|week begin|week beginning|week commencing|w c|wc|week ending|week end|week end date|we date|w e|trading week|iso week|calendar week|week no|week number|year week|yearweek|yyyyww|week date|date|week id|sales week|retail week|first day|last day|period',
    within: /\b(week|wk)\b/,
  },
  {
    meaning: 'category',
    whole:
      'category|cat|category name|product category|department|dept|commodity group|product group|merchandise group|division',
    within: /\bcategory\b/,
  },
  {
    meaning: 'line',
    whole:
      'line|product line|line name|product line name|subcategory|sub category|segment|product family|family|sub group|subgroup',
    within: /\b(subcategory|product line)\b/,
  },
  {
    meaning: 'item',
    whole:
      'item|item code|item no|item nr|item number|item id|sku|sku code|sku no|sku id|sku number|article|article no|article nr|article number|article code|article id|product code|product no|product number|product id|upc|ean|gtin|barcode|plu|product|code',
    within: /\b(sku|ean|gtin|upc|barcode)\b|\b(item|article|product) (code|id|no|nr|number)\b/,
  },
  {
    meaning: 'itemName',
    whole:
      'item name|item description|item text|description|product name|product description|article name|article description|article text|sku name|sku description|name|product',
    within: /\b(item|article|product|sku) (name|description|text)\b/,
  },
  {
    meaning: 'location',
    whole:
      'location|location code|location name|store|store no|store nr|store number|store code|store id|store name|shop|branch|outlet|region|area|channel|site|market|depot|banner|point of sale|pos',
    within: /\b(store|location|shop|branch|outlet|region|channel)\b/,
  },
  {
    meaning: 'units',
    whole:
      'units|unit sales|sales units|units sold|sold units|qty|quantity|quantity sold|sales quantity|sales qty|qty sold|pieces|pcs|volume|sales volume|sold|sales pieces|items sold|number sold',
    within: /\b(units|qty|quantity|pieces)\b/,
  },
  {
    meaning: 'netValue',
    whole:
      'net value|net sales|sales value|value|revenue|turnover|net revenue|net turnover|sales|amount|sales amount|net amount|value sales|money|net sales value|sales revenue',
    within: /\b(net value|net sales|sales value|revenue|turnover)\b/,
  },
  {
    meaning: 'regularPrice',
    whole:
      'regular price|reg price|shelf price|list price|base price|normal price|full price|rrp|standard price|everyday price|undiscounted price|price before discount',
    within: /\b(regular|shelf|list|base|normal|full|standard|everyday)\b.*\bprice\b/,
  },
  {
    meaning: 'price',
    whole:
      'price|price paid|net price|unit price|selling price|sales price|average price|avg price|actual price|paid price|retail price|promo price|promotion price|price per unit|asp',
    within: /\bprice\b/,
  },
  {
    meaning: 'depth',
    whole:
      'depth|promo depth|promotion depth|discount|discount pct|discount percent|discount rate|price cut|price reduction|markdown|reduction|pct off|percent off|off|cut',
    within: /\b(discount|depth|price cut|price reduction)\b/,
  },
  {
    meaning: 'feature',
    whole: 'feature|featured|feature ad|advertised|advert|ad|leaflet|flyer|circular|advertising|brochure',
    within: /\b(feature|leaflet|flyer|advert|advertised)\b/,
  },
  {
    meaning: 'display',
    whole:
      'display|displayed|second placement|secondary placement|secondary display|end cap|endcap|gondola end|gondola|off shelf|extra placement|in store display',
    within: /\b(display|placement|endcap)\b/,
  },
  {
    meaning: 'mechanic',
    whole:
      'coupon|multibuy|multi buy|bogof|bundle|loyalty|sampling|tv|radio|voucher|promo flag|on promotion|on promo|promo|promoted|deal',
  },
  {
    meaning: 'gap',
    whole:
      'gap|out of stock|oos|stockout|stock out|shelf gap|share out of stock|out of stock share|oos share|oos rate|empty shelf',
    within: /\b(out of stock|oos|stockout|gap)\b/,
  },
  { meaning: 'daysOpen', whole: 'days open|trading days|open days|days traded|opening days', within: /\bdays open\b/ },
  {
    meaning: 'promotionName',
    whole: 'promotion|promotion name|promo name|promo|campaign|campaign name|offer|offer name|promotion title|action',
    within: /\b(promotion|promo|campaign) (name|title)\b/,
  },
];

const WHOLE_NAMES = new Map<string, ColumnMeaning[]>();
for (const { meaning, whole } of WORDS) {
  for (const name of whole.split('|')) WHOLE_NAMES.set(name, [...(WHOLE_NAMES.get(name) ?? []), meaning]);
}

/** Names that several things go by; their content decides. */
const VAGUE = new Set([
  'date',
  'period',
  'product',
  'name',
  'code',
  'value',
  'sales',
  'amount',
  'volume',
  'off',
  'cut',
  'promo',
  'action',
  'ad',
  'area',
  'market',
  'we date',
  'first day',
  'last day',
  'sold',
  'money',
  'deal',
  'family',
]);

/** The canonical meaning of a column name as written, or null. */
export function matchCanonicalName(name: string): NameMatch | null {
  const meaning = CANONICAL.get(name.trim());
  if (meaning) return { meaning, confidence: 1 };
  const mechanic = /^promo_([a-z0-9][a-z0-9_]*)$/.exec(name.trim())?.[1];
  return mechanic ? { meaning: 'mechanic', mechanic, confidence: 1 } : null;
}

/** What a column name may mean, surest first; empty if it says nothing. */
export function matchHeaderName(name: string): NameMatch[] {
  const canonical = matchCanonicalName(name.toLowerCase());
  const words = simplifyName(name);
  const whole = (WHOLE_NAMES.get(words) ?? []).map((meaning): NameMatch => {
    const confidence = VAGUE.has(words) ? 0.7 : 0.92;
    return meaning === 'mechanic' ? { meaning, mechanic: nameMechanic(words), confidence } : { meaning, confidence };
  });
  const within = WORDS.filter(({ within: pattern }) => pattern?.test(words)).map(({ meaning }): NameMatch => ({
    meaning,
    confidence: 0.75,
  }));
  const prefixed = /^(?:promo|promotion|mechanic|mech) (.+)$/.exec(words)?.[1];
  const isOther = prefixed !== undefined && [...whole, ...within].length === 0;
  const mechanics: NameMatch[] = isOther
    ? [{ meaning: 'mechanic', mechanic: nameMechanic(prefixed), confidence: 0.8 }]
    : [];
  const seen = new Set<ColumnMeaning>();
  return [...(canonical ? [{ ...canonical, confidence: 0.95 }] : []), ...whole, ...within, ...mechanics].filter(
    ({ meaning }) => {
      if (seen.has(meaning)) return false;
      seen.add(meaning);
      return true;
    },
  );
}

/** Name of a mechanic as it is stored: small letters, digits and underscores. */
export function nameMechanic(words: string): string {
  return simplifyName(words).replace(/ /g, '_').slice(0, 40) || 'other';
}

/** Small letters and digits with single spaces; accents dropped. */
export function simplifyName(name: string): string {
  return name
    .replace(/([a-z])([A-Z])/g, '$1 $2')
    .normalize('NFKD')
    .replace(/\p{M}/gu, '')
    .toLowerCase()
    .replace(/%/g, ' pct ')
    .replace(/[^a-z0-9]+/g, ' ')
    .trim();
}
