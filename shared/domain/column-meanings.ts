/** What a column of an imported file can mean. Each meaning stands for one column at most, `mechanic` and `ignore` for any number. */
export const COLUMN_MEANINGS = [
  'week',
  'category',
  'line',
  'item',
  'itemName',
  'location',
  'units',
  'netValue',
  'price',
  'regularPrice',
  'depth',
  'feature',
  'display',
  'mechanic',
  'gap',
  'daysOpen',
  'promotionName',
  'ignore',
] as const;

export type ColumnMeaning = (typeof COLUMN_MEANINGS)[number];

/** Meanings whose cells are shares of 0…1, written as fractions, percents or yes and no. */
export const SHARE_MEANINGS: readonly ColumnMeaning[] = ['depth', 'feature', 'display', 'mechanic', 'gap'];

/** Meanings whose cells are numbers. */
export const NUMBER_MEANINGS: readonly ColumnMeaning[] = [
  'units',
  'netValue',
  'price',
  'regularPrice',
  'daysOpen',
  ...SHARE_MEANINGS,
];
