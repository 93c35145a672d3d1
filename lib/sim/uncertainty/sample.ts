import type { Control, DoseMap, SystemModel } from '@/lib/contracts';
import { doseMapSpreads, sampleDoseMap } from '../dose-map';
import type { CompiledSystem } from '../equations/types';
import { evenPoints } from '../random/low-discrepancy';
import { normalQuantile } from '../random/normal-quantile';
import { spreadQuantile } from '../random/spread';

export interface Draw {
  /** Parameter values, length m; the control's own entry is nominal. */
  readonly parameters: Float64Array;
  /** The dose map of this draw; null = no valid map. */
  readonly doseMap: DoseMap | null | undefined;
  /** Coordinates as standard normal deviates, one an uncertain parameter. */
  readonly deviates: Float64Array;
}

export interface Sampler {
  /** Uncertain parameters (indices), the control excluded. */
  readonly uncertain: readonly number[];
  draws(count: number, seed: number): Draw[];
  /** Parameters at given standard normal deviates of the uncertain ones. */
  at(deviates: Float64Array): Float64Array;
}

/** Draws the model's and the dose map's spreads from a seeded low-discrepancy sequence. */
export function sampler(model: SystemModel, control: Control, system: CompiledSystem): Sampler {
  const uncertain = model.parameters
    .map((p, i) => (p.spread && p.symbol !== control.symbol ? i : -1))
    .filter((i) => i >= 0);
  const mapSpreads = doseMapSpreads(control.doseMap).length;
  const value = (i: number, u: number) => {
    const parameter = model.parameters[i]!;
    return spreadQuantile(parameter.value, parameter.spread, u);
  };
  return {
    uncertain,
    draws(count, seed) {
      const d = uncertain.length;
      return evenPoints(count, d + mapSpreads, seed).map((u) => {
        const parameters = Float64Array.from(system.values);
        uncertain.forEach((i, k) => {
          parameters[i] = value(i, u[k]!);
        });
        const doseMap =
          mapSpreads > 0 ? sampleDoseMap(control.doseMap, u.subarray(d)) : control.doseMap;
        const deviates = Float64Array.from(uncertain, (_, k) => normalQuantile(u[k]!));
        return { parameters, doseMap, deviates };
      });
    },
    at(deviates) {
      const parameters = Float64Array.from(system.values);
      uncertain.forEach((i, k) => {
        parameters[i] = value(i, normalCdf(deviates[k]!));
      });
      return parameters;
    },
  };
}

/** Standard normal distribution function for the few moderate arguments used here (Simpson's rule). */
function normalCdf(x: number): number {
  const steps = 200;
  const h = x / steps;
  const density = (v: number) => Math.exp(-0.5 * v * v) / Math.sqrt(2 * Math.PI);
  let sum = density(0) + density(x);
  for (let i = 1; i < steps; i++) sum += (i % 2 ? 4 : 2) * density(i * h);
  return 0.5 + (sum * h) / 3;
}
