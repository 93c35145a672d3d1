import { EngineError } from '@/lib/contracts/common';
import type { SystemModel } from '@/lib/contracts/model';
import { differentiate, gradient } from './differentiate';
import { type Generated, generate, type Target } from './emit';
import { Graph, type LeafOp } from './graph';
import { FUNCTIONS, parseExpression, type Scope } from './parse';
import { ExpressionError } from './tokens';
import type { CompiledSystem } from './types';

/** One thing to mend in a model; `at` is the dotted path of the field. */
export interface ModelProblem {
  readonly at: string;
  readonly message: string;
}

interface ParsedModel {
  readonly graph: Graph;
  readonly rhs: number[];
  readonly readouts: number[];
  readonly delays: number[];
  readonly problems: ModelProblem[];
}

const MAX_DELAYS = 100;
const MAX_JACOBIAN = 4_000_000;
const SYMBOL = /^[A-Za-z][A-Za-z0-9_]*$/;

/** Every problem of the model's symbols, equations and readouts; empty when it can be compiled. */
export function checkModel(model: SystemModel): ModelProblem[] {
  return parseModel(model).problems;
}

/**
 * Compiles a model to plain functions. Derivatives are symbolic; functions that not every use needs
 * (directional forms, derivatives by parameters) are generated when first called.
 * Throws EngineError: `invalid-equation` with `at` such as `equations.x`; `limit-exceeded` for size.
 */
export function compileModel(model: SystemModel): CompiledSystem {
  const parsed = parseModel(model);
  const first = parsed.problems[0];
  if (first) throw new EngineError('invalid-equation', first.message, first.at);
  const entries = parsed.rhs.length ** 2 * (parsed.delays.length + 1);
  if (parsed.delays.length > MAX_DELAYS || entries > MAX_JACOBIAN) {
    throw new EngineError(
      'limit-exceeded',
      `${parsed.delays.length} different delays in ${parsed.rhs.length} equations are too many to work: at most ${MAX_DELAYS} delays, fewer for large models`,
      'equations',
    );
  }
  return new System(model, parsed);
}

function parseModel(model: SystemModel): ParsedModel {
  const problems: ModelProblem[] = [];
  const graph = new Graph();
  const variables = declare(model.variables, 'variables', new Map(), problems);
  const parameters = declare(model.parameters, 'parameters', variables, problems);
  const delays: number[] = [];
  const scope: Scope = {
    variables,
    parameters,
    delay(expression) {
      const known = delays.indexOf(expression);
      return known >= 0 ? known : delays.push(expression) - 1;
    },
  };
  const parse = (source: string | undefined, at: string, missing: string): number => {
    try {
      if (typeof source !== 'string') throw new ExpressionError(missing);
      return parseExpression(source, graph, scope);
    } catch (error) {
      if (!(error instanceof ExpressionError)) throw error;
      problems.push({ at, message: error.message });
      return graph.zero;
    }
  };
  const equation = (s: string) =>
    Object.hasOwn(model.equations, s) ? model.equations[s] : undefined;
  const rhs = model.variables.map((v) =>
    parse(equation(v.symbol), `equations.${v.symbol}`, `${v.symbol} has no equation; write one`),
  );
  for (const key of Object.keys(model.equations)) {
    if (!variables.has(key)) {
      problems.push({
        at: `equations.${key}`,
        message: `${key} is not a variable; declare it first`,
      });
    }
  }
  const readouts = model.readouts
    ? model.readouts.map((r, i) =>
        parse(r.expression, `readouts.${i}.expression`, 'the readout has no expression'),
      )
    : model.variables.map((_, i) => graph.leaf('z', i));
  return { graph, rhs, readouts, delays, problems };
}

function declare(
  list: readonly { symbol: string }[],
  at: string,
  taken: ReadonlyMap<string, number>,
  problems: ModelProblem[],
): Map<string, number> {
  const map = new Map<string, number>();
  list.forEach(({ symbol }, i) => {
    const path = `${at}.${i}.symbol`;
    if (!SYMBOL.test(symbol)) {
      problems.push({
        at: path,
        message: `"${symbol}" is no symbol: a letter, then letters, digits, underscores`,
      });
    } else if (symbol === 't' || symbol === 'pi' || FUNCTIONS.has(symbol)) {
      problems.push({ at: path, message: `the name ${symbol} is reserved; choose another` });
    } else if (taken.has(symbol) || map.has(symbol)) {
      problems.push({ at: path, message: `the symbol ${symbol} is declared twice` });
    }
    map.set(symbol, i);
  });
  return map;
}

/** Keeps the result of a function of a small whole number. */
function kept<T>(make: (index: number) => T): (index: number) => T {
  const list: (T | undefined)[] = [];
  return (index) => {
    const known = list[index];
    if (known !== undefined) return known;
    const made = make(index);
    list[index] = made;
    return made;
  };
}

class System implements CompiledSystem {
  readonly n: number;
  readonly m: number;
  readonly K: number;
  readonly variables: readonly string[];
  readonly parameters: readonly string[];
  readonly readouts: CompiledSystem['readouts'];
  readonly start: Float64Array;
  readonly values: Float64Array;
  readonly nonnegative: readonly boolean[];
  readonly delays: CompiledSystem['delays'];
  readonly rhs: CompiledSystem['rhs'];
  readonly jacobian: CompiledSystem['jacobian'];
  readonly readout: CompiledSystem['readout'];
  private readonly graph: Graph;
  private readonly parsed: ParsedModel;
  private readonly entries: Target[];

  constructor(model: SystemModel, parsed: ParsedModel) {
    this.graph = parsed.graph;
    this.parsed = parsed;
    this.n = model.variables.length;
    this.m = model.parameters.length;
    this.K = parsed.delays.length;
    this.variables = model.variables.map((v) => v.symbol);
    this.parameters = model.parameters.map((p) => p.symbol);
    this.readouts = model.readouts
      ? model.readouts.map((r) => ({ symbol: r.symbol, unit: r.unit, noiseSd: r.noiseSd ?? 0 }))
      : model.variables.map((v) => ({ symbol: v.symbol, unit: v.unit, noiseSd: 0 }));
    this.start = Float64Array.from(model.variables, (v) => v.start);
    this.values = Float64Array.from(model.parameters, (p) => p.value);
    this.nonnegative = model.variables.map((v) => v.nonnegative === true);
    this.entries = jacobianEntries(this.graph, parsed.rhs, this.n * (this.K + 1));
    this.delays = this.vector(parsed.delays, ['p']);
    this.rhs = this.vector(parsed.rhs, ['z', 'p']);
    this.readout = this.vector(parsed.readouts, ['z', 'p']);
    this.jacobian = generate(this.graph, this.entries, this.n * this.n * (this.K + 1), ['z', 'p']);
  }

  parameterIndex(symbol: string): number {
    return this.parameters.indexOf(symbol);
  }

  parameterDerivative(z: Float64Array, p: Float64Array, j: number, out: Float64Array): void {
    this.byParameter(j)(z, p, out);
  }

  delayDerivative(p: Float64Array, j: number, out: Float64Array): void {
    this.delayByParameter(j)(p, out);
  }

  jacobianParameter(z: Float64Array, p: Float64Array, j: number, out: Float64Array): void {
    this.jacobianByParameter(j)(z, p, out);
  }

  second(
    z: Float64Array,
    p: Float64Array,
    u: Float64Array,
    v: Float64Array,
    out: Float64Array,
  ): void {
    this.form(2)(z, p, u, v, out);
  }

  third(
    z: Float64Array,
    p: Float64Array,
    u: Float64Array,
    v: Float64Array,
    w: Float64Array,
    out: Float64Array,
  ): void {
    this.form(3)(z, p, u, v, w, out);
  }

  private vector(roots: readonly number[], args: readonly string[]): Generated {
    const targets = roots.map((root, slot) => ({ slot, root }));
    return generate(this.graph, targets, roots.length, args);
  }

  private readonly byParameter = kept((j) =>
    this.vector(differentiate(this.graph, this.parsed.rhs, unit(this.graph, 'p', j)), ['z', 'p']),
  );

  private readonly delayByParameter = kept((j) =>
    this.vector(differentiate(this.graph, this.parsed.delays, unit(this.graph, 'p', j)), ['p']),
  );

  private readonly jacobianByParameter = kept((j) => {
    const roots = this.entries.map((e) => e.root);
    const derivatives = differentiate(this.graph, roots, unit(this.graph, 'p', j));
    const targets = this.entries.map((e, i) => ({ slot: e.slot, root: derivatives[i]! }));
    return generate(this.graph, targets, this.n * this.n * (this.K + 1), ['z', 'p']);
  });

  /** Directional derivative of order 2 or 3 along the symbols u, v (and w). */
  private readonly form = kept((order) => {
    const directions: LeafOp[] = ['u', 'v', 'w'].slice(0, order) as LeafOp[];
    let roots = this.parsed.rhs;
    for (const direction of directions) {
      roots = differentiate(this.graph, roots, (op, index) =>
        op === 'z' ? this.graph.leaf(direction, index) : null,
      );
    }
    return this.vector(roots, ['z', 'p', ...directions]);
  });
}

/** The seed that is 1 at one leaf. */
function unit(graph: Graph, leaf: LeafOp, index: number) {
  return (op: LeafOp, i: number) => (op === leaf && i === index ? graph.one : null);
}

/** The entries of the Jacobian that are not identically zero, by row and column. */
function jacobianEntries(graph: Graph, rhs: readonly number[], columns: number): Target[] {
  return rhs.flatMap((root, row) =>
    [...gradient(graph, root)]
      .sort((a, b) => a[0] - b[0])
      .map(([column, derivative]) => ({ slot: row * columns + column, root: derivative })),
  );
}
