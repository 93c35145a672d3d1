import { EngineError } from '@/lib/contracts/common';
import type { SimulateAnswer, SimulateRequest } from '@/lib/contracts/predict';
import { checkDelays } from '../equations/check-delays';
import type { CompiledSystem } from '../equations/types';
import { type RandomSource, randomSource } from '../random/generator';
import { compileRequestModel } from '../request-model';
import { type Advance, Course } from './course';

const MAX_SAMPLES = 2_000_000;
const TOLERANCE = 1e-10;
const MAX_STEPS = 3_000_000;

/**
 * The time course of a model's readouts at 0, every, 2·every … up to until, in the model's time unit.
 * With delays the history before 0 is constant. With `noise`, seeded Gaussian errors of each readout's noiseSd are
 * added. Relative error of the course about 1e-9 a cycle.
 * Throws EngineError: `invalid-equation`, `invalid-request` for unknown symbols, `limit-exceeded` where the course
 * leaves the finite range, is stiffer than the integrator can follow, or is sampled too often.
 */
export function simulate(request: SimulateRequest): SimulateAnswer {
  const system = compileRequestModel(request.model);
  const p = parameterValues(system, request.set);
  const start = startState(system, request.from ?? {});
  checkDelays(system, p, -1, 0, 0);
  const count = Math.floor((request.until / request.every) * (1 + 1e-12)) + 1;
  if (count * system.readouts.length > MAX_SAMPLES) {
    throw new EngineError(
      'limit-exceeded',
      `${count} readings of ${system.readouts.length} readouts are too many: sample less often or for a shorter time`,
      'every',
    );
  }
  const times = Array.from({ length: count }, (_, i) => i * request.every);
  const columns = sampleReadouts(system, p, start, times);
  if (request.noise) addNoise(system, columns, randomSource(request.seed));
  return {
    times,
    readouts: Object.fromEntries(system.readouts.map((r, i) => [r.symbol, columns[i]!])),
  };
}

function parameterValues(system: CompiledSystem, set: Record<string, number>): Float64Array {
  const p = Float64Array.from(system.values);
  for (const [symbol, value] of Object.entries(set)) {
    const index = system.parameterIndex(symbol);
    if (index < 0) {
      throw new EngineError(
        'invalid-request',
        `the model has no parameter ${symbol}; set one of ${system.parameters.join(', ') || 'none'}`,
        `set.${symbol}`,
      );
    }
    p[index] = value;
  }
  return p;
}

function startState(system: CompiledSystem, from: Record<string, number>): Float64Array {
  const x = Float64Array.from(system.start);
  for (const [symbol, value] of Object.entries(from)) {
    const index = system.variables.indexOf(symbol);
    if (index < 0) {
      throw new EngineError(
        'invalid-request',
        `the model has no variable ${symbol}; start from ${system.variables.join(', ')}`,
        `from.${symbol}`,
      );
    }
    x[index] = value;
  }
  return x;
}

/**
 * Readouts at rising times from 0 on, one column a readout, for a model that is compiled already: `p` its parameter
 * values, `start` its state and history before 0. Throws EngineError `limit-exceeded` as `simulate` does.
 */
export function sampleReadouts(
  system: CompiledSystem,
  p: Float64Array,
  start: Float64Array,
  times: readonly number[],
): number[][] {
  const course = new Course(system, p, start, { tolerance: TOLERANCE, maxSteps: MAX_STEPS });
  const columns: number[][] = system.readouts.map(() => []);
  const z = new Float64Array(system.n * (system.K + 1));
  const values = new Float64Array(system.readouts.length);
  const take = (time: number) => {
    system.readout(z, p, values);
    values.forEach((value, i) => {
      if (!Number.isFinite(value)) notFinite(system.readouts[i]!.symbol, time);
      columns[i]!.push(value);
    });
  };
  course.stateAt(0, z);
  take(0);
  let next = 1;
  const end = times[times.length - 1]!;
  const outcome = course.advance(end, (step) => {
    while (next < times.length && times[next]! <= step.to) {
      step.state(times[next]!, z);
      take(times[next]!);
      next += 1;
    }
    return false;
  });
  if (outcome.outcome !== 'reached') throw courseError(system, outcome);
  return columns;
}

function notFinite(symbol: string, time: number): never {
  throw new EngineError(
    'limit-exceeded',
    `the readout ${symbol} is not finite at time ${time}: correct its expression or the start`,
    'model.readouts',
  );
}

/** The error that a failed course is reported as. */
export function courseError(
  system: CompiledSystem,
  failed: Exclude<Advance, { outcome: 'reached' }>,
): EngineError {
  switch (failed.outcome) {
    case 'escaped':
      return new EngineError(
        'limit-exceeded',
        `${system.variables[failed.variable]} leaves the finite range at time ${shown(failed.time)}: check the signs and the values of its equation, or simulate a shorter time`,
        'until',
      );
    case 'too-many-steps':
      return new EngineError(
        'limit-exceeded',
        `the course needs too many steps; it was followed to time ${shown(failed.time)}: simulate a shorter time, or remove the fastest process`,
        'until',
      );
    case 'stopped':
      return new EngineError('internal', 'the course was stopped before its end', 'until');
  }
}

function shown(time: number): string {
  return String(Number(time.toPrecision(6)));
}

function addNoise(system: CompiledSystem, columns: number[][], random: RandomSource): void {
  const count = columns[0]?.length ?? 0;
  for (let t = 0; t < count; t += 1) {
    system.readouts.forEach((readout, i) => {
      columns[i]![t] = columns[i]![t]! + readout.noiseSd * random.normal();
    });
  }
}
