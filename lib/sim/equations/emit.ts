import { children, type Graph, type Node, reachable } from './graph';

/** A generated function: writes the roots' values into its last argument. */
export type Generated = (...buffers: Float64Array[]) => void;

const logOrZero = (x: number) => (x > 0 ? Math.log(x) : 0);
const inverseOrZero = (x: number) => (x > 0 ? 1 / x : 0);
const scaledPower = (c: number, x: number, e: number) => (c === 0 ? 0 : c * x ** e);
const select = (a: number, b: number, c: number, d: number) => (a <= b ? c : d);
const HELPERS = { logOrZero, inverseOrZero, scaledPower, select };

/** Deeper nesting than this is cut into named steps, so that the script parser never runs out of stack. */
const MAX_INLINE = 160;
/** Above this many steps one function would no longer be optimised; the work is cut into several. */
const STEPS_PER_FUNCTION = 600;

/** One slot of the output that a root goes to. */
export interface Target {
  readonly slot: number;
  readonly root: number;
}

/**
 * Generates a function of the buffers named in `args` that sets `out[slot]` for every target; slots below
 * `length` that no target names become 0. The text consists of operators, numbers and indices made here
 * from the checked graph: nothing that a user wrote reaches it.
 */
export function generate(
  graph: Graph,
  targets: readonly Target[],
  length: number,
  args: readonly string[],
): Generated {
  const live = targets.filter((t) => t.root !== graph.zero);
  const writer = new Writer(graph, live);
  const steps = writer.write();
  if (live.length < length) steps.unshift('out.fill(0);');
  const parts: string[] = [];
  if (steps.length <= STEPS_PER_FUNCTION && !writer.shared) {
    parts.push(`return function(${[...args, 'out'].join(',')}){${steps.join('\n')}};`);
  } else {
    const list = [...args, 'out'].join(',');
    const calls: string[] = [];
    parts.push(`const w_=new Float64Array(${writer.stepCount});`);
    for (let i = 0; i < steps.length; i += STEPS_PER_FUNCTION) {
      parts.push(`function s${i}(${list}){${steps.slice(i, i + STEPS_PER_FUNCTION).join('\n')}}`);
      calls.push(`s${i}(${list});`);
    }
    parts.push(`return function(${list}){${calls.join('')}};`);
  }
  const factory = new Function(...Object.keys(HELPERS), `'use strict';${parts.join('\n')}`);
  return factory(...Object.values(HELPERS)) as Generated;
}

class Writer {
  readonly shared: boolean;
  stepCount = 0;
  private readonly text = new Map<number, string>();
  private readonly order: number[];
  private readonly uses = new Map<number, number>();

  constructor(
    private readonly graph: Graph,
    private readonly targets: readonly Target[],
  ) {
    this.order = reachable(
      graph,
      targets.map((t) => t.root),
    );
    for (const id of this.order) {
      for (const child of children(graph.nodes[id]!)) this.use(child);
    }
    for (const t of targets) this.use(t.root);
    this.shared = this.order.length > 2 * STEPS_PER_FUNCTION;
  }

  private use(id: number): void {
    this.uses.set(id, (this.uses.get(id) ?? 0) + 1);
  }

  write(): string[] {
    const steps: string[] = [];
    for (const id of this.order) {
      const node = this.graph.nodes[id]!;
      const text = expression(node, (child) => this.text.get(child)!);
      const trivial = node.op === 'number' || (this.shared && children(node).length === 0);
      if (trivial || ((this.uses.get(id) ?? 0) < 2 && text.length <= MAX_INLINE)) {
        this.text.set(id, text);
        continue;
      }
      const name = this.shared ? `w_[${this.stepCount}]` : `t${this.stepCount}`;
      this.stepCount += 1;
      steps.push(this.shared ? `${name}=${text};` : `const ${name}=${text};`);
      this.text.set(id, name);
    }
    for (const t of this.targets) steps.push(`out[${t.slot}]=${this.text.get(t.root)!};`);
    return steps;
  }
}

function expression(node: Node, text: (child: number) => string): string {
  switch (node.op) {
    case 'number':
      return node.value < 0 ? `(${node.value})` : `${node.value}`;
    case 'z':
    case 'p':
    case 'u':
    case 'v':
    case 'w':
      return `${node.op}[${node.index}]`;
    case 'add':
      return `(${text(node.a)}+${text(node.b)})`;
    case 'sub':
      return `(${text(node.a)}-${text(node.b)})`;
    case 'mul':
      return `(${text(node.a)}*${text(node.b)})`;
    case 'div':
      return `(${text(node.a)}/${text(node.b)})`;
    case 'power':
      return text(node.c) === '1'
        ? `Math.pow(${text(node.x)},${text(node.e)})`
        : `scaledPower(${text(node.c)},${text(node.x)},${text(node.e)})`;
    case 'select':
      return `select(${text(node.a)},${text(node.b)},${text(node.c)},${text(node.d)})`;
    case 'neg':
      return `(-${text(node.a)})`;
    case 'logOrZero':
    case 'inverseOrZero':
      return `${node.op}(${text(node.a)})`;
    default:
      return `Math.${node.op}(${text(node.a)})`;
  }
}
