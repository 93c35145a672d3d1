import { EngineError } from '@/lib/contracts/common';

/**
 * Checked expressions as one shared graph.
 *
 * Every node is stored once (equal expressions have equal ids), and the children of a node always have
 * smaller ids than the node. So common subexpressions are shared for nothing, an ascending walk is a
 * topological order, and no walk needs recursion however long an equation is.
 */
export type UnaryOp =
  | 'neg'
  | 'exp'
  | 'log'
  | 'log10'
  | 'sqrt'
  | 'sin'
  | 'cos'
  | 'tan'
  | 'sinh'
  | 'cosh'
  | 'tanh'
  | 'abs'
  | 'sign'
  /** log(x) where x > 0, else 0: the factor that d(x^n)/dn carries. */
  | 'logOrZero'
  /** 1/x where x > 0, else 0: the derivative of `logOrZero`. */
  | 'inverseOrZero';
/** z: stacked state, p: parameter, u, v, w: directions of directional derivatives. */
export type LeafOp = 'z' | 'p' | 'u' | 'v' | 'w';
export type Node =
  | { op: 'number'; value: number }
  | { op: LeafOp; index: number }
  | { op: UnaryOp; a: number }
  | { op: 'add' | 'sub' | 'mul' | 'div'; a: number; b: number }
  /** c·x^e, and 0 where c = 0 whatever x^e is. */
  | { op: 'power'; c: number; x: number; e: number }
  /** c where a ≤ b, else d. */
  | { op: 'select'; a: number; b: number; c: number; d: number };

const MAX_NODES = 3_000_000;
const LARGEST_EXPANDED_POWER = 8;

const foldUnary: Partial<Record<UnaryOp, (x: number) => number>> = {
  neg: (x) => -x,
  exp: Math.exp,
  log: Math.log,
  log10: Math.log10,
  sqrt: Math.sqrt,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
  sinh: Math.sinh,
  cosh: Math.cosh,
  tanh: Math.tanh,
  abs: Math.abs,
  sign: Math.sign,
};

export class Graph {
  readonly nodes: Node[] = [];
  private readonly ids = new Map<string, number>();
  readonly zero = this.number(0);
  readonly one = this.number(1);

  private intern(key: string, node: Node): number {
    const known = this.ids.get(key);
    if (known !== undefined) return known;
    if (this.nodes.length >= MAX_NODES) {
      throw new EngineError(
        'limit-exceeded',
        'the equations and their derivatives are too large to compile: shorten or split the model',
        'equations',
      );
    }
    this.nodes.push(node);
    this.ids.set(key, this.nodes.length - 1);
    return this.nodes.length - 1;
  }

  /** The value of a node that is a plain number, else null. */
  constant(id: number): number | null {
    const node = this.nodes[id]!;
    return node.op === 'number' ? node.value : null;
  }

  number(value: number): number {
    return this.intern(`#${value}`, { op: 'number', value: value === 0 ? 0 : value });
  }

  leaf(op: LeafOp, index: number): number {
    return this.intern(`${op}${index}`, { op, index });
  }

  /** A number where the folded value is finite; null keeps the operation for run time. */
  private folded(value: number): number | null {
    return Number.isFinite(value) ? this.number(value) : null;
  }

  unary(op: UnaryOp, a: number): number {
    const node = this.nodes[a]!;
    if (node.op === 'number') {
      const fold = foldUnary[op];
      const id = fold ? this.folded(fold(node.value)) : null;
      if (id !== null) return id;
    }
    if (op === 'neg') {
      if (node.op === 'neg') return node.a;
      if (node.op === 'sub') return this.sub(node.b, node.a);
    }
    return this.intern(`${op}(${a}`, { op, a });
  }

  private binary(op: 'add' | 'sub' | 'mul' | 'div', a: number, b: number): number {
    return this.intern(`${op}(${a},${b}`, { op, a, b });
  }

  add(a: number, b: number): number {
    const x = this.constant(a);
    const y = this.constant(b);
    if (x === 0) return b;
    if (y === 0) return a;
    if (x !== null && y !== null) return this.folded(x + y) ?? this.binary('add', a, b);
    const right = this.nodes[b]!;
    if (right.op === 'neg') return this.sub(a, right.a);
    const left = this.nodes[a]!;
    if (left.op === 'neg') return this.sub(b, left.a);
    if (a === b) return this.mul(this.number(2), a);
    return a < b ? this.binary('add', a, b) : this.binary('add', b, a);
  }

  sub(a: number, b: number): number {
    const x = this.constant(a);
    const y = this.constant(b);
    if (y === 0) return a;
    if (x === 0) return this.unary('neg', b);
    if (a === b) return this.zero;
    if (x !== null && y !== null) return this.folded(x - y) ?? this.binary('sub', a, b);
    const right = this.nodes[b]!;
    if (right.op === 'neg') return this.add(a, right.a);
    return this.binary('sub', a, b);
  }

  mul(a: number, b: number): number {
    const x = this.constant(a);
    const y = this.constant(b);
    if (x === 0 || y === 0) return this.zero;
    if (x === 1) return b;
    if (y === 1) return a;
    if (x === -1) return this.unary('neg', b);
    if (y === -1) return this.unary('neg', a);
    if (x !== null && y !== null) return this.folded(x * y) ?? this.binary('mul', a, b);
    const left = this.nodes[a]!;
    if (left.op === 'neg') return this.unary('neg', this.mul(left.a, b));
    const right = this.nodes[b]!;
    if (right.op === 'neg') return this.unary('neg', this.mul(a, right.a));
    return a < b ? this.binary('mul', a, b) : this.binary('mul', b, a);
  }

  div(a: number, b: number): number {
    const x = this.constant(a);
    const y = this.constant(b);
    if (y === 1) return a;
    if (x === 0 && y !== 0) return this.zero;
    if (x !== null && y !== null) return this.folded(x / y) ?? this.binary('div', a, b);
    const left = this.nodes[a]!;
    if (left.op === 'neg') return this.unary('neg', this.div(left.a, b));
    return this.binary('div', a, b);
  }

  /** c·x^e. Small whole exponents become products, which are faster and exact in sign. */
  power(c: number, x: number, e: number): number {
    if (c === this.zero) return this.zero;
    const k = this.constant(e);
    if (k !== null && Number.isInteger(k) && k >= 0 && k <= LARGEST_EXPANDED_POWER) {
      return this.mul(c, this.wholePower(x, k));
    }
    const base = this.constant(x);
    if (k !== null && base !== null) {
      const id = this.folded(base ** k);
      if (id !== null) return this.mul(c, id);
    }
    if (k === -1 && c === this.one) return this.div(this.one, x);
    return this.intern(`^(${c},${x},${e}`, { op: 'power', c, x, e });
  }

  private wholePower(x: number, k: number): number {
    if (k === 0) return this.one;
    const half = this.wholePower(x, Math.floor(k / 2));
    const square = this.mul(half, half);
    return k % 2 === 0 ? square : this.mul(x, square);
  }

  select(a: number, b: number, c: number, d: number): number {
    if (c === d) return c;
    const x = this.constant(a);
    const y = this.constant(b);
    if (x !== null && y !== null) return x <= y ? c : d;
    return this.intern(`?(${a},${b},${c},${d}`, { op: 'select', a, b, c, d });
  }

  min(a: number, b: number): number {
    return this.select(a, b, a, b);
  }

  max(a: number, b: number): number {
    return this.select(b, a, a, b);
  }
}

/** The children of a node. */
export function children(node: Node): number[] {
  switch (node.op) {
    case 'number':
    case 'z':
    case 'p':
    case 'u':
    case 'v':
    case 'w':
      return [];
    case 'add':
    case 'sub':
    case 'mul':
    case 'div':
      return [node.a, node.b];
    case 'power':
      return [node.c, node.x, node.e];
    case 'select':
      return [node.a, node.b, node.c, node.d];
    default:
      return [node.a];
  }
}

/** Ids of all nodes that the roots are made of, ascending, which is a topological order. */
export function reachable(graph: Graph, roots: readonly number[]): number[] {
  const seen = new Set<number>(roots);
  const stack = [...seen];
  for (let id = stack.pop(); id !== undefined; id = stack.pop()) {
    for (const child of children(graph.nodes[id]!)) {
      if (!seen.has(child)) {
        seen.add(child);
        stack.push(child);
      }
    }
  }
  return [...seen].sort((a, b) => a - b);
}
