import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';

export interface PricedQuantity {
  fromUnits: number;
  fromPrice: number;
  toUnits: number;
  toPrice: number;
}

export interface PriceVolumeMix {
  fromValue: number;
  /** (ΣQ₁ − ΣQ₀) · average price before. */
  volume: number;
  /** What is left: items with prices other than the average changed their share. */
  mix: number;
  /** ΣQ₁·(P₁ − P₀). */
  price: number;
  toValue: number;
}

/**
 * Splits a change of value into volume, mix and price, exactly: volume = change of total units at the old average price, price = change of each
 * price on the new units, mix = Σ(Q₁ − Q₀)·P₀ − volume. Units and prices in whatever currency the prices have.
 * Throws UndefinedStatisticError if there were no units before (no average price).
 */
export function splitPriceVolumeMix(items: readonly PricedQuantity[]): PriceVolumeMix {
  let fromUnits = 0;
  let toUnits = 0;
  let fromValue = 0;
  let toValue = 0;
  let price = 0;
  let quantity = 0;
  for (const item of items) {
    if (![item.fromUnits, item.fromPrice, item.toUnits, item.toPrice].every(Number.isFinite)) {
      throw new InvalidInputError('units and prices must be finite');
    }
    fromUnits += item.fromUnits;
    toUnits += item.toUnits;
    fromValue += item.fromUnits * item.fromPrice;
    toValue += item.toUnits * item.toPrice;
    price += item.toUnits * (item.toPrice - item.fromPrice);
    quantity += (item.toUnits - item.fromUnits) * item.fromPrice;
  }
  if (fromUnits === 0) throw new UndefinedStatisticError('without units before there is no average price');
  const volume = (toUnits - fromUnits) * (fromValue / fromUnits);
  return { fromValue, volume, mix: quantity - volume, price, toValue };
}
