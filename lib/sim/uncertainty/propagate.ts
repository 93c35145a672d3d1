import { EngineError, type OnsetSpread, type PredictRequest } from '@/lib/contracts';
import { controlToDose } from '../dose-map';
import { checkDelays } from '../equations/check-delays';
import type { CompiledSystem } from '../equations/types';
import { type Analysis, analyse, type Range } from '../onset/analyse';
import { matchOnsets } from './match-onsets';
import { quantile } from './quantile';
import { type Draw, sampler } from './sample';
import { WarmStart } from './warm-start';

export interface PropagateHooks {
  progress?(done: number, total: number, what: string): void;
  cancelled?(): boolean;
}

/**
 * The onset's distribution, given the spreads: one entry for each nominal onset.
 *
 * Each draw is solved by Newton from a first-order prediction and certified against the whole spectrum;
 * where that fails for any onset the draw gets a full scan of its own. An onset that left the range counts
 * as none when the stability of the range's ends shows that no other came in.
 * Draws without a steady state, with a negative delay or leaving the physical range count in `none`.
 */
export function propagate(
  system: CompiledSystem,
  request: PredictRequest,
  range: Range,
  nominal: Analysis,
  hooks: PropagateHooks,
  total = request.draws,
): OnsetSpread[] {
  const onsets = nominal.scan.onsets;
  const found: { values: number[]; doses: (number | null)[] }[] = onsets.map(() => ({
    values: [],
    doses: [],
  }));
  if (onsets.length > 0) {
    const sampling = sampler(request.model, request.control, system);
    const draws = sampling.draws(request.draws, request.seed);
    const warm = new WarmStart(system, range, nominal, sampling);
    const exact = sampling.uncertain.length === 0;
    draws.forEach((draw, i) => {
      if (i % 50 === 0) {
        hooks.progress?.(i, total, 'drawing from the spreads');
        if (hooks.cancelled?.()) throw new EngineError('limit-exceeded', 'cancelled');
      }
      const values = exact
        ? onsets.map((o) => o.control)
        : onsetsOfDraw(system, range, nominal, warm, draw);
      values.forEach((value, k) => {
        if (value === null) return;
        found[k]!.values.push(value);
        found[k]!.doses.push(draw.doseMap === null ? null : controlToDose(draw.doseMap, value));
      });
    });
  }
  return onsets.map((o, k) => summarise(found[k]!, o.control, request.draws));
}

function onsetsOfDraw(
  system: CompiledSystem,
  range: Range,
  nominal: Analysis,
  warm: WarmStart,
  draw: Draw,
): (number | null)[] {
  const onsets = nominal.scan.onsets;
  if (!isUsable(system, range, draw.parameters)) return onsets.map(() => null);
  const quick = warm.solve(draw);
  if (quick) return quick;
  try {
    const own = analyse(system, draw.parameters, range, nominal.equilibrium.x);
    return matchOnsets(onsets, own.scan.onsets);
  } catch (error) {
    if (error instanceof EngineError && error.code === 'no-steady-state') {
      return onsets.map(() => null);
    }
    throw error;
  }
}

function isUsable(system: CompiledSystem, range: Range, p: Float64Array): boolean {
  if (!p.every((v) => Number.isFinite(v))) return false;
  if (system.K === 0) return true;
  try {
    checkDelays(system, p, range.controlIndex, range.from, range.to);
    return true;
  } catch (error) {
    if (error instanceof EngineError) return false;
    throw error;
  }
}

function summarise(
  found: { values: number[]; doses: (number | null)[] },
  nominal: number,
  draws: number,
): OnsetSpread {
  const sorted = [...found.values].sort((a, b) => a - b);
  const at = (p: number) => (sorted.length > 0 ? quantile(sorted, p) : nominal);
  return {
    draws,
    median: at(0.5),
    low: at(0.05),
    high: at(0.95),
    none: (draws - sorted.length) / draws,
    values: found.values,
    doses: found.doses,
  };
}
