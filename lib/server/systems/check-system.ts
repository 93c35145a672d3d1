import type { Control, SystemModel } from '@/lib/contracts';
import { EngineError } from '@/lib/contracts';
import type { FieldProblem } from '@/lib/contracts/forms/system';
import { figure } from '@/lib/format';
import { checkDoseMap } from '@/lib/sim/dose-map';
import { checkDelays } from '@/lib/sim/equations/check-delays';
import { checkModel, compileModel } from '@/lib/sim/equations/compile';
import type { CompiledSystem } from '@/lib/sim/equations/types';

/** Places of the control range at which the right-hand side is tried, both ends included. */
const TRIALS = 257;

/**
 * Everything that stands in the way of working with a system: symbols, equations, delays, dose map,
 * and a right-hand side or readout that is no number at the start values somewhere in the control
 * range. Empty when there is nothing. `at` is a path below {model, control}.
 */
export function checkSystem(model: SystemModel, control: Control): FieldProblem[] {
  const problems: FieldProblem[] = checkModel(model).map((p) => ({ ...p, at: `model.${p.at}` }));
  problems.push(...spreadProblems(model));
  if (!model.parameters.some((p) => p.symbol === control.symbol)) {
    problems.push({
      at: 'control.symbol',
      message: `The control parameter ${control.symbol} is not among the parameters; add it there or choose another`,
    });
  }
  problems.push(...engineProblem(() => checkDoseMap(control.doseMap)));
  if (problems.length > 0) return problems;
  let system: CompiledSystem;
  try {
    system = compileModel(model);
  } catch (error) {
    return [asProblem(error)];
  }
  const p = Float64Array.from(system.values);
  const index = system.parameterIndex(control.symbol);
  const late = engineProblem(() => checkDelays(system, p, index, control.from, control.to));
  return late.length > 0 ? late : trial(system, model, control);
}

function asProblem(error: unknown): FieldProblem {
  if (!(error instanceof EngineError)) throw error;
  const inside = error.at.startsWith('control') || error.at.startsWith('model');
  return { at: inside ? error.at : `model.${error.at}`, message: error.message };
}

function engineProblem(check: () => void): FieldProblem[] {
  try {
    check();
    return [];
  } catch (error) {
    return [asProblem(error)];
  }
}

/** A lognormal needs a positive median; a uniform must hold the value it spreads. */
function spreadProblems(model: SystemModel): FieldProblem[] {
  return model.parameters.flatMap((p, i) => {
    const at = `model.parameters.${i}.spread`;
    if (p.spread?.kind === 'lognormal' && !(p.value > 0)) {
      return [
        { at, message: `${p.symbol} is ${p.value}: a lognormal spread needs a value above 0` },
      ];
    }
    if (p.spread?.kind === 'uniform' && (p.value < p.spread.low || p.value > p.spread.high)) {
      return [{ at, message: `The value of ${p.symbol} lies outside its own spread; widen it` }];
    }
    return [];
  });
}

const why = (value: number) =>
  Number.isNaN(value)
    ? 'is undefined (0/0, or a root, logarithm or power of a negative number)'
    : 'is infinite (a division by zero, or a number too large)';

/** Evaluates the right-hand side at the start values all along the control range. */
function trial(system: CompiledSystem, model: SystemModel, control: Control): FieldProblem[] {
  const blocks = system.K + 1;
  const z = new Float64Array(system.n * blocks);
  for (let k = 0; k < blocks; k += 1) z.set(system.start, k * system.n);
  const p = Float64Array.from(system.values);
  const index = system.parameterIndex(control.symbol);
  const rates = new Float64Array(system.n);
  const readouts = new Float64Array(system.readouts.length);
  const found = new Map<string, FieldProblem>();
  const note = (at: string, what: string, value: number, where: number) => {
    if (Number.isFinite(value) || found.has(at)) return;
    const message = `${what} ${why(value)} at the start values where ${control.symbol} = ${figure(where)}; change the equation, the start values or the control range`;
    found.set(at, { at, message });
  };
  for (let i = 0; i < TRIALS; i += 1) {
    const where = control.from + ((control.to - control.from) * i) / (TRIALS - 1);
    p[index] = where;
    system.rhs(z, p, rates);
    system.readout(z, p, readouts);
    rates.forEach((rate, v) => {
      const symbol = system.variables[v] ?? '';
      note(`model.equations.${symbol}`, `The rate of ${symbol}`, rate, where);
    });
    if (!model.readouts) continue;
    readouts.forEach((value, r) => {
      const symbol = system.readouts[r]?.symbol ?? '';
      note(`model.readouts.${r}.expression`, `The readout ${symbol}`, value, where);
    });
  }
  return [...found.values()];
}
