/** Lexical elements of an expression, with the character position (from 1) where each begins. */
export type Token =
  | { kind: 'number'; text: string; value: number; position: number }
  | { kind: 'name'; text: string; position: number }
  | { kind: 'sign'; text: string; position: number }
  | { kind: 'end'; text: ''; position: number };

/** What is wrong with an expression: a sentence that says where and how to mend it. */
export class ExpressionError extends Error {}

const NUMBER = /(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?/y;
const NAME = /[A-Za-z][A-Za-z0-9_]*/y;
const SIGNS = '+-*/^(),';
const ADVICE: Record<string, string> = {
  '−': 'write the minus as -',
  '–': 'write the minus as -',
  '·': 'write multiplication as *',
  '×': 'write multiplication as *',
  '÷': 'write division as /',
  '²': 'write a square as ^2',
  '[': 'use round brackets',
  ']': 'use round brackets',
  '{': 'use round brackets',
  '}': 'use round brackets',
  '=': 'write the right-hand side alone',
  "'": 'write the right-hand side alone; derivatives cannot stand in it',
  ';': 'write one expression',
  '%': 'write a share as a number, 0.05 for 5 %',
  _: 'a symbol begins with a letter',
  π: 'write pi',
};

export function fail(position: number, near: string, what: string): never {
  const place = near === '' ? 'at the end' : `at character ${position}, near "${near}"`;
  throw new ExpressionError(`${place}: ${what}`);
}

function match(pattern: RegExp, source: string, at: number): string | null {
  pattern.lastIndex = at;
  return pattern.exec(source)?.[0] ?? null;
}

/** Cuts a source text into tokens; throws ExpressionError at the first character outside the grammar. */
export function tokenize(source: string): Token[] {
  const tokens: Token[] = [];
  let i = 0;
  while (i < source.length) {
    const char = source[i]!;
    const position = i + 1;
    if (char === ' ' || char === '\t' || char === '\n' || char === '\r') {
      i += 1;
      continue;
    }
    const number = match(NUMBER, source, i);
    if (number !== null) {
      const value = Number(number);
      if (!Number.isFinite(value)) fail(position, number, 'this number is too large');
      tokens.push({ kind: 'number', text: number, value, position });
      i += number.length;
      continue;
    }
    const name = match(NAME, source, i);
    if (name !== null) {
      tokens.push({ kind: 'name', text: name, position });
      i += name.length;
      continue;
    }
    if (!SIGNS.includes(char)) {
      const whole = String.fromCodePoint(source.codePointAt(i)!);
      const advice = ADVICE[whole];
      fail(
        position,
        whole,
        `"${whole}" is not part of an expression${advice ? `; ${advice}` : ''}`,
      );
    }
    if (char === '*' && source[i + 1] === '*') fail(position, '**', 'write a power as ^');
    tokens.push({ kind: 'sign', text: char, position });
    i += 1;
  }
  tokens.push({ kind: 'end', text: '', position: source.length + 1 });
  return tokens;
}
