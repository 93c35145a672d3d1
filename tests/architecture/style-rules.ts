import { isPure } from './import-rules';
import { type Breach, each, type Node, parse, type SourceFile } from './source';

const MOST_LINES = 300;

const nameOf = (value: unknown): string | null => {
  const node = value as Node | null | undefined;
  if (node?.type === 'Identifier') return node.name as string;
  if (node?.type === 'CallExpression') return nameOf(node.callee);
  if (node?.type === 'MemberExpression') {
    const object = nameOf(node.object);
    const property = node.property as Node;
    const key = property.type === 'Identifier' ? property.name : property.value;
    return object === null ? null : `${object}.${String(key)}`;
  }
  return null;
};

const GLOBALS = ['globalThis', 'window', 'self'];
const plain = (name: string | null) => {
  const [first, ...rest] = (name ?? '').split('.');
  return GLOBALS.includes(first ?? '') ? rest.join('.') : (name ?? '');
};

/** Whether an object's key or a property's name is meant, not a value. */
function isKey(node: Node, parent: Node | null): boolean {
  if (!parent) return false;
  const key = parent.key === node && parent.computed !== true && parent.value !== node;
  return key || (parent.property === node && parent.computed !== true);
}

/** Rule 2, of words: clock, zone and seed are arguments; nothing is fetched, nothing is random. */
export function purityBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  if (!isPure(file.path)) return [];
  const found: string[] = [];
  each(tree, (node, parent) => {
    const name = plain(nameOf(node));
    if (node.type === 'MemberExpression' && ['Date.now', 'Math.random'].includes(name)) {
      found.push(name);
    }
    if (node.type === 'MemberExpression' && name.startsWith('performance.')) found.push(name);
    if (node.type === 'Identifier' && node.name === 'process' && !isKey(node, parent)) {
      found.push('process');
    }
    if (node.type === 'CallExpression' && plain(nameOf(node.callee)) === 'fetch') {
      found.push('fetch(');
    }
    if (plain(nameOf(node.callee)) !== 'Date') return;
    const count = (node.arguments as unknown[] | undefined)?.length ?? 0;
    if (node.type === 'CallExpression') found.push('Date()');
    if (node.type === 'NewExpression' && count === 0) found.push('new Date() without argument');
  });
  return found.map((what) => ({ path: file.path, what: `a pure floor may not use ${what}` }));
}

/** Where the environment may be read: the one door of the server, and what runs before it. */
const ENVIRONMENT = [
  /^lib\/server\/env\.ts$/,
  /^proxy\.ts$/,
  /^(scripts|tests)\//,
  /^[\w.-]+\.config\.ts$/,
];

export function environmentBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  if (ENVIRONMENT.some((r) => r.test(file.path))) return [];
  let found = false;
  each(tree, (node) => {
    if (node.type === 'MemberExpression' && plain(nameOf(node)).startsWith('process.env')) {
      found = true;
    }
    const init = node.type === 'VariableDeclarator' ? nameOf(node.init) : null;
    if (init === 'process' || init === 'globalThis.process') found = true;
  });
  return found ? [{ path: file.path, what: 'process.env is read in lib/server/env.ts alone' }] : [];
}

// Written in two halves, so that this file is no breach of its own.
const SILENCED = ['@ts-', 'biome-', 'eslint-'].flatMap((tool) =>
  ['ignore', 'nocheck', 'expect-error', 'disable'].map((word) => tool + word),
);
const LEFT_OVER = ['TO' + 'DO', 'FIX' + 'ME'];

export function textBreaches({ path, text }: SourceFile): Breach[] {
  const lines = text.split('\n').length - (text.endsWith('\n') ? 1 : 0);
  const long =
    lines >= MOST_LINES ? [`has ${lines} lines; fewer than ${MOST_LINES} are asked`] : [];
  const silenced = SILENCED.filter((s) => text.includes(s)).map((s) => `silences a tool: ${s}`);
  const left = LEFT_OVER.filter((s) => new RegExp(`\\b${s}\\b`).test(text)).map((s) => `says ${s}`);
  return [...long, ...silenced, ...left].map((what) => ({ path, what }));
}

export function anyBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  let count = 0;
  each(tree, (node) => {
    if (node.type === 'TSAnyKeyword') count += 1;
  });
  return count > 0 ? [{ path: file.path, what: 'the type any takes every check away' }] : [];
}

const RUNNERS = ['test', 'it', 'describe', 'suite', 'bench'];
const SKIPPING = ['skip', 'only', 'todo', 'fails', 'skipIf', 'runIf', 'fixme', 'fail'];

/** A test that is skipped, or that keeps all others from running, proves nothing. */
export function skippedBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  if (!file.path.startsWith('tests/')) return [];
  const found = new Set<string>();
  each(tree, (node) => {
    const bare = node.type === 'CallExpression' ? nameOf(node.callee) : null;
    if (bare !== null && /^(xit|xtest|xdescribe|fit|fdescribe)$/.test(bare)) found.add(bare);
    if (node.type !== 'MemberExpression') return;
    const [first, ...rest] = (nameOf(node) ?? '').split('.');
    if (!RUNNERS.includes(first ?? '')) return;
    if (rest.some((r) => SKIPPING.includes(r))) found.add(nameOf(node) ?? '');
  });
  return [...found].map((what) => ({ path: file.path, what: `${what} keeps tests from running` }));
}
