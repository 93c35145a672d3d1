import { MODEL_LIMITS } from '@/lib/contracts/model';
import type { Graph, UnaryOp } from './graph';
import { ExpressionError, fail, type Token, tokenize } from './tokens';

/**
 * The parser of the model's expressions: recursive descent straight into the checked graph.
 *
 * A parser of our own, not a mathematics package's, because the grammar must hold exactly. The packages tried
 * accept more than it (implied multiplication, units, matrices, assignment, words such as `mod` and `to` as
 * operators), keep no character positions to name in an error, and bound neither depth nor size.
 *
 *   sum     = product { (+|-) product }
 *   product = signed { (*|/) signed }
 *   signed  = - signed | power
 *   power   = atom [ ^ ( - … power ) ]            to the right, the exponent may carry minus signs
 *   atom    = number | pi | symbol | variable(t - sum) | function(sum {, sum}) | ( sum )
 */
export interface Scope {
  readonly variables: ReadonlyMap<string, number>;
  readonly parameters: ReadonlyMap<string, number>;
  /** Index of the delay with this expression, entered into the list if it is new. */
  delay(expression: number): number;
}

const MAX_DEPTH = 200;
const UNARY: ReadonlySet<string> = new Set(
  'exp log log10 sqrt sin cos tan sinh cosh tanh abs'.split(' '),
);
export const FUNCTIONS: ReadonlySet<string> = new Set([...UNARY, 'min', 'max']);

/** The node of the expression in `graph`; throws ExpressionError for anything outside the grammar. */
export function parseExpression(source: string, graph: Graph, scope: Scope): number {
  if (source.length > MODEL_LIMITS.equationLength) {
    throw new ExpressionError(
      `the expression has ${source.length} characters; at most ${MODEL_LIMITS.equationLength} are read`,
    );
  }
  if (source.trim() === '') throw new ExpressionError('the expression is empty: write one, or 0');
  return new Parser(tokenize(source), graph, scope).whole();
}

class Parser {
  private next = 0;
  private depth = 0;
  private inDelay = false;

  constructor(
    private readonly tokens: readonly Token[],
    private readonly graph: Graph,
    private readonly scope: Scope,
  ) {}

  whole(): number {
    const node = this.sum();
    const rest = this.peek();
    if (rest.kind !== 'end') this.unexpected(rest);
    return node;
  }

  private peek(): Token {
    return this.tokens[this.next]!;
  }

  private take(): Token {
    const token = this.tokens[this.next]!;
    if (token.kind !== 'end') this.next += 1;
    return token;
  }

  private isSign(text: string): boolean {
    const token = this.peek();
    return token.kind === 'sign' && token.text === text;
  }

  private accept(text: string): boolean {
    if (!this.isSign(text)) return false;
    this.next += 1;
    return true;
  }

  private close(opened: Token): void {
    if (this.accept(')')) return;
    const token = this.peek();
    if (token.kind === 'end') {
      fail(opened.position, opened.text, 'this bracket is never closed; add ")"');
    }
    this.unexpected(token);
  }

  /** A token that cannot follow a complete value. */
  private unexpected(token: Token): never {
    if (token.kind === 'sign' && token.text === ')') {
      fail(token.position, token.text, 'there is no opening bracket for this one');
    }
    if (token.kind === 'sign' && token.text === ',') {
      fail(token.position, token.text, 'a comma stands only between the arguments of min and max');
    }
    fail(
      token.position,
      token.text,
      'two values stand side by side; write the operator between them, * for multiplication',
    );
  }

  /** Guards the only recursion there is: brackets, minus signs and powers. */
  private nested(work: () => number): number {
    this.depth += 1;
    if (this.depth > MAX_DEPTH) {
      const token = this.peek();
      fail(token.position, token.text, `brackets, signs and powers nest deeper than ${MAX_DEPTH}`);
    }
    const node = work();
    this.depth -= 1;
    return node;
  }

  private sum(): number {
    let node = this.product();
    for (;;) {
      if (this.accept('+')) node = this.graph.add(node, this.product());
      else if (this.accept('-')) node = this.graph.sub(node, this.product());
      else return node;
    }
  }

  private product(): number {
    let node = this.signed();
    for (;;) {
      if (this.accept('*')) node = this.graph.mul(node, this.signed());
      else if (this.accept('/')) node = this.graph.div(node, this.signed());
      else return node;
    }
  }

  private signed(): number {
    if (!this.accept('-')) return this.power();
    return this.graph.unary(
      'neg',
      this.nested(() => this.signed()),
    );
  }

  private power(): number {
    const base = this.atom();
    if (!this.accept('^')) return base;
    const exponent = this.nested(() => this.signed());
    return this.graph.power(this.graph.one, base, exponent);
  }

  private atom(): number {
    const token = this.take();
    if (token.kind === 'number') return this.graph.number(token.value);
    if (token.kind === 'name') return this.named(token);
    if (token.kind === 'sign' && token.text === '(') {
      const node = this.nested(() => this.sum());
      this.close(token);
      return node;
    }
    if (token.kind === 'end')
      fail(token.position, '', 'the expression breaks off; a value is missing');
    const what =
      token.text === '+'
        ? 'a plus stands only between two values; leave it out'
        : `a value is missing before "${token.text}"`;
    fail(token.position, token.text, what);
  }

  private named(token: Token): number {
    const name = token.text;
    if (FUNCTIONS.has(name)) return this.call(token);
    const called = this.isSign('(');
    if (name === 't') {
      fail(token.position, name, 'time stands only in a delayed variable, such as x(t - tau)');
    }
    const variable = this.scope.variables.get(name);
    if (variable !== undefined) {
      if (called) return this.delayed(token, variable);
      if (this.inDelay) {
        fail(
          token.position,
          name,
          'a delay is made of parameters and numbers alone, not variables',
        );
      }
      return this.graph.leaf('z', variable);
    }
    const parameter = this.scope.parameters.get(name);
    if (parameter === undefined && name !== 'pi') this.unknown(token, called);
    if (called) {
      const kind = name === 'pi' ? 'a number' : 'a parameter';
      fail(token.position, `${name}(`, `${name} is ${kind}; write ${name}*( for multiplication`);
    }
    return parameter === undefined ? this.graph.number(Math.PI) : this.graph.leaf('p', parameter);
  }

  private unknown(token: Token, called: boolean): never {
    const what = called
      ? `there is no function ${token.text}; there are ${[...FUNCTIONS].join(', ')}`
      : `the symbol ${token.text} is neither a variable nor a parameter; declare it or correct it`;
    fail(token.position, token.text, what);
  }

  /** variable(t - delay); the index of a delayed value follows from the number of its delay. */
  private delayed(token: Token, variable: number): number {
    const open = this.take();
    const name = token.text;
    const time = this.take();
    if (time.kind !== 'name' || time.text !== 't') {
      fail(
        token.position,
        `${name}(`,
        `${name} is a variable; write ${name}*( for multiplication or ${name}(t - tau) for a delay`,
      );
    }
    if (this.inDelay) {
      fail(token.position, name, 'a delay is made of parameters and numbers alone, not variables');
    }
    if (!this.isSign('-')) {
      fail(
        time.position,
        't',
        `write the delayed variable as ${name}(t - tau), or ${name} for now`,
      );
    }
    this.inDelay = true;
    let delay = this.graph.zero;
    for (;;) {
      if (this.accept('-'))
        delay = this.graph.add(
          delay,
          this.nested(() => this.product()),
        );
      else if (this.accept('+'))
        delay = this.graph.sub(
          delay,
          this.nested(() => this.product()),
        );
      else break;
    }
    this.inDelay = false;
    this.close(open);
    const fixed = this.graph.constant(delay);
    if (fixed !== null && fixed < 0) {
      fail(token.position, name, `the delay is ${fixed}; a delay cannot be negative`);
    }
    if (fixed === 0) return this.graph.leaf('z', variable);
    const block = this.scope.delay(delay) + 1;
    return this.graph.leaf('z', block * this.scope.variables.size + variable);
  }

  private call(token: Token): number {
    const name = token.text;
    const open = this.take();
    if (open.kind !== 'sign' || open.text !== '(') {
      fail(token.position, name, `${name} is a function; write ${name}( … )`);
    }
    const list = [this.nested(() => this.sum())];
    while (this.accept(',')) list.push(this.nested(() => this.sum()));
    this.close(open);
    if (UNARY.has(name)) {
      if (list.length !== 1) {
        fail(token.position, name, `${name} takes one argument, not ${list.length}`);
      }
      return this.graph.unary(name as UnaryOp, list[0]!);
    }
    if (list.length < 2) fail(token.position, name, `${name} takes two arguments or more`);
    return list.reduce((a, b) => (name === 'min' ? this.graph.min(a, b) : this.graph.max(a, b)));
  }
}
