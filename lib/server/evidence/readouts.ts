import type { SystemModel } from '@/lib/contracts';

/** What can be measured of a system, in its order: the declared readouts, else every variable. */
export function readoutsOf(model: SystemModel): { symbol: string; unit: string; name: string }[] {
  if (model.readouts && model.readouts.length > 0) {
    return model.readouts.map((r) => ({ symbol: r.symbol, unit: r.unit ?? '', name: r.symbol }));
  }
  return model.variables.map((v) => ({
    symbol: v.symbol,
    unit: v.unit ?? '',
    name: v.label || v.symbol,
  }));
}
