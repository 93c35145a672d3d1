import type { SystemModel } from '@/lib/contracts';
import { simulate } from '@/lib/sim/integrate/simulate';
import { glycolysis } from '@/lib/sim/library/glycolysis';

/**
 * An invented extract that the library's model describes except for its turnover, which is a little
 * faster: the observed onset must not simply repeat the predicted one.
 */
const TURNOVER_PER_MIN = 3.15;
const MMOL_L_MIN_PER_ML_H = 0.1;
const EVERY_MIN = 0.25;

const extract: SystemModel = {
  ...glycolysis.model,
  parameters: glycolysis.model.parameters.map((p) =>
    p.symbol === 'k' ? { ...p, value: TURNOVER_PER_MIN } : p,
  ),
};

/**
 * The lower onset of this extract, mmol/L/min. In the scaled model the steady state loses stability
 * at b² = (1 − 2a − √(1 − 8a))/2 (Strogatz 1994, Nonlinear Dynamics and Chaos, section 7.3); here
 * a = 0.08 and the feed is v = k·S·b with S = 0.2 mmol/L.
 */
export const trueOnset =
  TURNOVER_PER_MIN * 0.2 * Math.sqrt((1 - 2 * 0.08 - Math.sqrt(1 - 8 * 0.08)) / 2);

export type State = { P: number; F: number };

/** A run's record at a pump rate in mL/h with the readouts' errors, and where the vessel stands after it. */
export function recordOf(of: { dose: number; from: State; minutes: number; seed: number }) {
  const request = {
    model: extract,
    set: { v: of.dose * MMOL_L_MIN_PER_ML_H },
    from: of.from,
    until: of.minutes,
    every: EVERY_MIN,
    seed: of.seed,
  };
  const { times, readouts } = simulate({ ...request, noise: true });
  const exact = simulate({ ...request, noise: false });
  const columns = { product: readouts.product ?? [], substrate: readouts.substrate ?? [] };
  const rows = times.map((t, i) =>
    [t.toFixed(2), columns.product[i]?.toFixed(4), columns.substrate[i]?.toFixed(4)].join(';'),
  );
  // The file has decimal commas, as an instrument in Berlin writes them.
  const csv = ['elapsed_min;product;substrate', ...rows].join('\n').replaceAll('.', ',');
  const end = (values: number[] | undefined) => values?.at(-1) ?? Number.NaN;
  return { csv, end: { P: end(exact.readouts.product), F: end(exact.readouts.substrate) } };
}
