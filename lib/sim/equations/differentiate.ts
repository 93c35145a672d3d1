import { children, type Graph, type LeafOp, type Node, reachable } from './graph';

/** The derivative of a leaf along the chosen direction, as a node; null where it is zero. */
export type Seed = (op: LeafOp, index: number) => number | null;

/**
 * Symbolic derivatives of `roots` along one direction, in one ascending walk over the graph.
 *
 * With a seed that is 1 at one leaf this is a column of the Jacobian; with direction symbols as seeds it
 * is a directional derivative, and applied twice or three times the bilinear and trilinear forms. The walk
 * costs as much as the graph is large, so forms for many variables stay of the size of the model.
 * `abs`, `min` and `max` are differentiated piece by piece; at the kink the lower piece is taken.
 */
export function differentiate(graph: Graph, roots: readonly number[], seed: Seed): number[] {
  const derivative = new Map<number, number>();
  for (const id of reachable(graph, roots)) {
    const result = derivativeOf(graph, id, seed, (child) => derivative.get(child) ?? graph.zero);
    if (result !== graph.zero) derivative.set(id, result);
  }
  return roots.map((root) => derivative.get(root) ?? graph.zero);
}

/**
 * The gradient of one root by the entries of the stacked state, in one descending walk (reverse accumulation, Griewank &
 * Walther 2008): entry index → derivative, without those that are identically zero. Costs as much as the root is
 * large, however many entries it has.
 */
export function gradient(g: Graph, root: number): Map<number, number> {
  const adjoint = new Map<number, number>([[root, g.one]]);
  const result = new Map<number, number>();
  for (const id of reachable(g, [root]).reverse()) {
    const own = adjoint.get(id);
    if (own === undefined || own === g.zero) continue;
    const node = g.nodes[id]!;
    if (node.op === 'z') result.set(node.index, own);
    for (const child of new Set(children(node))) {
      const partial = derivativeOf(
        g,
        id,
        () => null,
        (c) => (c === child ? g.one : g.zero),
      );
      if (partial === g.zero) continue;
      adjoint.set(child, g.add(adjoint.get(child) ?? g.zero, g.mul(own, partial)));
    }
  }
  return result;
}

function derivativeOf(g: Graph, id: number, seed: Seed, d: (child: number) => number): number {
  const node = g.nodes[id]!;
  switch (node.op) {
    case 'number':
      return g.zero;
    case 'z':
    case 'p':
    case 'u':
    case 'v':
    case 'w':
      return seed(node.op, node.index) ?? g.zero;
    case 'add':
      return g.add(d(node.a), d(node.b));
    case 'sub':
      return g.sub(d(node.a), d(node.b));
    case 'mul':
      return g.add(g.mul(d(node.a), node.b), g.mul(node.a, d(node.b)));
    case 'div':
      return g.div(g.sub(d(node.a), g.mul(id, d(node.b))), node.b);
    case 'power':
      return powerRule(g, id, node, d);
    case 'select':
      return g.select(node.a, node.b, d(node.c), d(node.d));
    default: {
      const da = d(node.a);
      return da === g.zero ? g.zero : unaryRule(g, id, node.op, node.a, da);
    }
  }
}

/** d(c·x^e) = dc·x^e + c·e·x^(e − 1)·dx + c·x^e·log(x)·de, the last 0 where x is not positive. */
function powerRule(
  g: Graph,
  id: number,
  node: Extract<Node, { op: 'power' }>,
  d: (child: number) => number,
): number {
  const { c, x, e } = node;
  let sum = g.power(d(c), x, e);
  const dx = d(x);
  if (dx !== g.zero) sum = g.add(sum, g.mul(g.power(g.mul(c, e), x, g.sub(e, g.one)), dx));
  const de = d(e);
  if (de !== g.zero) sum = g.add(sum, g.mul(g.mul(id, g.unary('logOrZero', x)), de));
  return sum;
}

function unaryRule(
  g: Graph,
  id: number,
  op: Extract<Node, { a: number }>['op'],
  a: number,
  da: number,
): number {
  switch (op) {
    case 'neg':
      return g.unary('neg', da);
    case 'exp':
      return g.mul(id, da);
    case 'log':
      return g.div(da, a);
    case 'log10':
      return g.div(da, g.mul(a, g.number(Math.LN10)));
    case 'sqrt':
      return g.div(da, g.mul(g.number(2), id));
    case 'sin':
      return g.mul(g.unary('cos', a), da);
    case 'cos':
      return g.unary('neg', g.mul(g.unary('sin', a), da));
    case 'tan':
      return g.mul(g.add(g.one, g.mul(id, id)), da);
    case 'sinh':
      return g.mul(g.unary('cosh', a), da);
    case 'cosh':
      return g.mul(g.unary('sinh', a), da);
    case 'tanh':
      return g.mul(g.sub(g.one, g.mul(id, id)), da);
    case 'abs':
      return g.mul(g.unary('sign', a), da);
    case 'logOrZero':
      return g.mul(g.unary('inverseOrZero', a), da);
    case 'inverseOrZero':
      return g.unary('neg', g.mul(g.mul(id, id), da));
    default:
      return g.zero;
  }
}
