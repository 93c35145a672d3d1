import { describe, expect, test } from 'vitest';
import { sourceFiles } from './source';
import {
  anyBreaches,
  environmentBreaches,
  purityBreaches,
  skippedBreaches,
  textBreaches,
} from './style-rules';

const files = sourceFiles();
const at = (path: string, text: string) => ({ path, text });

describe('the pure floors', () => {
  test.each([
    ['const t = Date.now();'],
    ['const t = new Date();'],
    ['const t = Date();'],
    ['const x = Math.random();'],
    ['const f = Math.random;'],
    ["const x = Math['random']();"],
    ['const x = globalThis.Math.random();'],
    ['const p = process.cwd();'],
    ['const { env } = process;'],
    ["const r = fetch('x');"],
    ["const r = window.fetch('x');"],
    ['const t = performance.now();'],
  ])('may not say %s', (text) => {
    expect(purityBreaches(at('lib/sim/x.ts', text))).not.toEqual([]);
    expect(purityBreaches(at('lib/server/x.ts', text))).toEqual([]);
  });

  test.each([
    ['const t = new Date(0);'],
    ["const note = 'Date.now() and Math.random()';"],
    ['const of = { process: 1 }; const a = of.process;'],
    ['// process.env'],
    ['const fetch2 = 1;'],
  ])('may say %s', (text) => {
    expect(purityBreaches(at('lib/planner/x.ts', text))).toEqual([]);
  });

  test('take clock, seed and settings as arguments', () => {
    expect(files.filter((f) => f.path.startsWith('lib/sim/')).length).toBeGreaterThan(20);
    expect(files.flatMap((f) => purityBreaches(f))).toEqual([]);
  });
});

describe('the environment', () => {
  test.each([
    ['const a = process.env.A;'],
    ["const a = process['env'].A;"],
    ['const { env } = process;'],
    ['const a = globalThis.process.env;'],
  ])('is not read by %s', (text) => {
    expect(environmentBreaches(at('lib/server/mail.ts', text))).not.toEqual([]);
    expect(environmentBreaches(at('components/ui/x.tsx', text))).not.toEqual([]);
    expect(environmentBreaches(at('lib/server/env.ts', text))).toEqual([]);
  });

  test('is read at one door', () => {
    expect(files.flatMap((f) => environmentBreaches(f))).toEqual([]);
  });
});

describe('every file', () => {
  test('is seen to be too long at 300 lines', () => {
    const lines = (n: number) => at('lib/sim/x.ts', 'const a = 1;\n'.repeat(n));
    expect(textBreaches(lines(300))).not.toEqual([]);
    expect(textBreaches(lines(299))).toEqual([]);
  });

  test.each([['// @ts-' + 'ignore'], ['// biome-' + 'ignore lint: x'], ['// TO' + 'DO: later']])(
    'is seen to silence a tool or to put off work: %s',
    (text) => {
      expect(textBreaches(at('lib/x.ts', text))).not.toEqual([]);
    },
  );

  test.each([['let a: any;'], ['const a = b as any;'], ['type A = Record<string, any>;']])(
    'is seen to say any: %s',
    (text) => {
      expect(anyBreaches(at('lib/x.ts', text))).not.toEqual([]);
      expect(anyBreaches(at('lib/x.ts', "const any = 'any: any';"))).toEqual([]);
    },
  );

  test.each([
    ["test.skip('a', () => {});"],
    ["describe.only('a', () => {});"],
    ["it.todo('a');"],
    ["test.skipIf(true)('a', () => {});"],
    ["test.each([1]).only('a', () => {});"],
    ["describe.skip.each([1])('a', () => {});"],
    ["xit('a', () => {});"],
  ])('of tests is seen to skip: %s', (text) => {
    expect(skippedBreaches(at('tests/x.test.ts', text))).not.toEqual([]);
    expect(skippedBreaches(at('lib/x.ts', text))).toEqual([]);
  });

  test('is short, typed, unsilenced, and its tests all run', () => {
    const breaches = files.flatMap((f) => [
      ...textBreaches(f),
      ...anyBreaches(f),
      ...skippedBreaches(f),
    ]);
    expect(breaches).toEqual([]);
  });
});
