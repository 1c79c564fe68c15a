import type { LeastSquaresInput } from '../../shared/statistics/regression/types.ts';
import { readColumn, readReferenceCsv, readReferenceJson, type ReferenceRow } from './read-reference.ts';

/** A design from columns, row-major. */
export function buildInput(
  columns: Readonly<Record<string, ArrayLike<number>>>,
  response: Float64Array,
): LeastSquaresInput {
  const names = Object.keys(columns);
  const rows = response.length;
  const design = new Float64Array(rows * names.length);
  names.forEach((name, j) => {
    for (let i = 0; i < rows; i++) design[i * names.length + j] = columns[name]![i]!;
  });
  return { design, rows, columns: names.length, response, names };
}

export function buildOnes(rows: number): Float64Array {
  return new Float64Array(rows).fill(1);
}

export interface NistSet {
  name: string;
  n: number;
  k: number;
  parameters: { name: string; estimate: number; se: number }[];
  residual_sd: number;
  r_squared: number;
  anova: { F: number | 'Infinity'; df_res: number; ss_res: number };
  data: Record<string, number[]>;
}

export function readNistSets(): NistSet[] {
  return Object.values(readReferenceJson('nist/nist_strd.json') as Record<string, NistSet>);
}

/** The certified model of a NIST set: no intercept (NoInt), six regressors (Longley), otherwise powers of x. */
export function buildNistInput(set: NistSet): LeastSquaresInput {
  const columns: Record<string, ArrayLike<number>> = {};
  set.parameters.forEach((parameter, j) => {
    if (set.name.startsWith('NoInt')) columns[parameter.name] = set.data['x']!;
    else if (set.name === 'Longley') columns[parameter.name] = j === 0 ? buildOnes(set.n) : set.data[`x${j}`]!;
    else columns[parameter.name] = set.data['x']!.map((x) => x ** j);
  });
  return buildInput(columns, Float64Array.from(set.data['y']!));
}

const brands = Array.from({ length: 11 }, (_, k) => `B${String(k + 1).padStart(2, '0')}`);

function buildSeason(weeks: ArrayLike<number>): Record<string, Float64Array> {
  const t = Float64Array.from(weeks, (week) => week - 39);
  return {
    t,
    sin1: t.map((value) => Math.sin((2 * Math.PI * value) / 52)),
    cos1: t.map((value) => Math.cos((2 * Math.PI * value) / 52)),
    sin2: t.map((value) => Math.sin((4 * Math.PI * value) / 52)),
    cos2: t.map((value) => Math.cos((4 * Math.PI * value) / 52)),
  };
}

export interface OrangeJuiceModel {
  input: LeastSquaresInput;
  weeks: Int32Array;
  stores: string[];
  units: Float64Array;
}

let panelRows: ReferenceRow[] | undefined;
let pricesByStoreWeek: Map<string, Map<string, number>> | undefined;

function readPanel(): { rows: ReferenceRow[]; prices: Map<string, Map<string, number>> } {
  panelRows ??= readReferenceCsv('oj/oj_store_brand_week.csv.gz');
  if (!pricesByStoreWeek) {
    pricesByStoreWeek = new Map();
    for (const row of panelRows) {
      const key = `${row['store']} ${row['week']}`;
      let prices = pricesByStoreWeek.get(key);
      if (!prices) pricesByStoreWeek.set(key, (prices = new Map()));
      prices.set(row['brand']!, Number(row['price_per_pack']));
    }
  }
  return { rows: panelRows, prices: pricesByStoreWeek };
}

export function readPanelRows(): ReferenceRow[] {
  return readPanel().rows;
}

/**
 * The store panel of one brand: ln packs on ln own price, ln prices of the other ten brands, deal, feat, t, two Fourier pairs (period 52) and store
 * dummies (base S002), rows by store and week. Stores stand in the training weeks, so that a design of other weeks has the same columns.
 */
export function buildPanelModel(brand: string, fromWeek: number, toWeek: number, isShort = false): OrangeJuiceModel {
  const { rows: all, prices } = readPanel();
  const rows = all.filter(
    (row) => row['brand'] === brand && Number(row['week']) >= fromWeek && Number(row['week']) <= toWeek,
  );
  const others = brands.filter((other) => other !== brand);
  const columns: Record<string, ArrayLike<number>> = { '(Intercept)': buildOnes(rows.length) };
  for (const name of isShort ? [brand] : [brand, ...others]) {
    columns[`lp_${name}`] = rows.map((row) => Math.log(prices.get(`${row['store']} ${row['week']}`)!.get(name)!));
  }
  columns['deal'] = readColumn(rows, 'deal');
  columns['feat'] = readColumn(rows, 'feat');
  if (!isShort) Object.assign(columns, buildSeason(readColumn(rows, 'week')));
  const stores = [...new Set(all.map((row) => row['store']!))].sort();
  for (const store of stores.slice(1)) {
    columns[`store${store}`] = rows.map((row) => (row['store'] === store ? 1 : 0));
  }
  const units = readColumn(rows, 'packs');
  return {
    input: buildInput(columns, units.map(Math.log)),
    weeks: Int32Array.from(readColumn(rows, 'week')),
    stores: rows.map((row) => row['store']!),
    units,
  };
}

/** The chain series of B04: ln of mean packs per reporting store on the same columns without stores. */
export function buildChainModel(fromWeek: number, toWeek: number): OrangeJuiceModel {
  const rows = readReferenceCsv('oj/B04_chain_series.csv').filter(
    (row) => Number(row['week']) >= fromWeek && Number(row['week']) <= toWeek,
  );
  const columns: Record<string, ArrayLike<number>> = { '(Intercept)': buildOnes(rows.length) };
  for (const name of ['B04', ...brands.filter((brand) => brand !== 'B04')]) {
    columns[`lp_${name}`] = readColumn(rows, `price_${name}`).map(Math.log);
  }
  columns['deal'] = readColumn(rows, 'deal');
  columns['feat'] = readColumn(rows, 'feat');
  Object.assign(columns, buildSeason(readColumn(rows, 'week')));
  const units = readColumn(rows, 'mean_packs');
  return {
    input: buildInput(columns, units.map(Math.log)),
    weeks: Int32Array.from(readColumn(rows, 'week')),
    stores: rows.map(() => 'All'),
    units,
  };
}

/**
 * ln packs on ln price, item and featured with every interaction, items B10, B05 and B01 (in this order), featured = feat > 0; treatment coding, so
 * that coefficient 1 is the unfeatured elasticity of B10.
 */
export function buildElasticityModel(): LeastSquaresInput {
  const order = ['B10', 'B05', 'B01'];
  const rows = readPanelRows().filter((row) => order.includes(row['brand']!));
  const logPrice = readColumn(rows, 'price_per_pack').map(Math.log);
  const second = rows.map((row) => (row['brand'] === order[1] ? 1 : 0));
  const third = rows.map((row) => (row['brand'] === order[2] ? 1 : 0));
  const featured = rows.map((row) => (Number(row['feat']) > 0 ? 1 : 0));
  const multiply = (...lists: ArrayLike<number>[]): number[] =>
    rows.map((_, i) => lists.reduce((product, list) => product * list[i]!, 1));
  return buildInput(
    {
      '(Intercept)': buildOnes(rows.length),
      price: logPrice,
      second,
      third,
      featured,
      'price:second': multiply(logPrice, second),
      'price:third': multiply(logPrice, third),
      'price:featured': multiply(logPrice, featured),
      'second:featured': multiply(second, featured),
      'third:featured': multiply(third, featured),
      'price:second:featured': multiply(logPrice, second, featured),
      'price:third:featured': multiply(logPrice, third, featured),
    },
    readColumn(rows, 'packs').map(Math.log),
  );
}
