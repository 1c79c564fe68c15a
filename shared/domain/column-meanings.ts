/** What a column of an imported file can mean. Each meaning stands for one column at most, `mechanic` and `ignore` for any number. */
export const columnMeanings = [
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

export type ColumnMeaning = (typeof columnMeanings)[number];

/** Meanings whose cells are shares of 0…1, written as fractions, percents or yes and no. */
export const shareMeanings: readonly ColumnMeaning[] = ['depth', 'feature', 'display', 'mechanic', 'gap'];

/** Meanings whose cells are numbers. */
export const numberMeanings: readonly ColumnMeaning[] = [
  'units',
  'netValue',
  'price',
  'regularPrice',
  'daysOpen',
  ...shareMeanings,
];
