import { existsSync, readdirSync, readFileSync, statSync } from 'node:fs';
import { dirname, join, posix, relative, resolve, sep } from 'node:path';
import { fileURLToPath } from 'node:url';
import { parseSync } from 'vite';

const root = fileURLToPath(new URL('../..', import.meta.url));
const FOLDERS = ['app', 'components', 'db', 'lib', 'scripts', 'tests'];
const ENDINGS = ['.ts', '.tsx', '.mts', '.mjs'];

/** One file of the project: its path from the root, with `/`, and its text. */
export type SourceFile = { path: string; text: string };
/** `to`: path from the root when it is a file of the project, a package's name otherwise. */
export type Import = { to: string; inside: boolean; typeOnly: boolean };
export type Breach = { path: string; what: string };

function walk(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) return walk(path);
    return ENDINGS.some((e) => entry.name.endsWith(e)) ? [path] : [];
  });
}

/** Every source file of the project, the configuration files of the root included. */
export function sourceFiles(): SourceFile[] {
  const top = readdirSync(root)
    .filter((name) => ENDINGS.some((e) => name.endsWith(e)) && name !== 'next-env.d.ts')
    .map((name) => join(root, name));
  const below = FOLDERS.map((f) => join(root, f))
    .filter(existsSync)
    .flatMap(walk);
  return [...top, ...below].map((file) => ({
    path: relative(root, file).split(sep).join('/'),
    text: readFileSync(file, 'utf8'),
  }));
}

export type Node = { type: string; [key: string]: unknown };
const isNode = (value: unknown): value is Node =>
  typeof value === 'object' && value !== null && typeof (value as Node).type === 'string';

const trees = new WeakMap<SourceFile, Node>();

/** The file's syntax tree; a file that cannot be read is an error, not an empty tree. */
export function parse(file: SourceFile): Node {
  const known = trees.get(file);
  if (known) return known;
  const { path, text } = file;
  const { program, errors } = parseSync(path, text);
  if (errors.length > 0) throw new Error(`${path}: ${errors[0]?.message}`);
  const tree = program as unknown as Node;
  trees.set(file, tree);
  return tree;
}

/** Calls `visit` for each node below `node`, itself included. */
export function each(node: unknown, visit: (node: Node, parent: Node | null) => void): void {
  const go = (value: unknown, parent: Node | null): void => {
    if (Array.isArray(value)) {
      for (const v of value) go(v, parent);
      return;
    }
    if (!isNode(value)) return;
    visit(value, parent);
    for (const child of Object.values(value)) go(child, value);
  };
  go(node, null);
}

function isFile(path: string): boolean {
  return existsSync(path) && statSync(path).isFile();
}

/** The project's file that a specifier names, without a guess where none is there. */
function resolveInside(from: string, specifier: string): string {
  const path = specifier.startsWith('@/')
    ? specifier.slice(2)
    : posix.join(dirname(from), specifier);
  const found = [path, `${path}.ts`, `${path}.tsx`, `${path}/index.ts`].find((p) =>
    isFile(resolve(root, p)),
  );
  return found ?? path;
}

function specifierOf(node: Node): { specifier: string; typeOnly: boolean } | null {
  const source = node.source as { value?: unknown } | null | undefined;
  const text = (value: unknown) => (typeof value === 'string' ? value : null);
  switch (node.type) {
    case 'ImportDeclaration': {
      const parts = node.specifiers as { importKind?: string }[];
      const allTypes = parts.length > 0 && parts.every((s) => s.importKind === 'type');
      const specifier = text(source?.value);
      return specifier === null
        ? null
        : { specifier, typeOnly: node.importKind === 'type' || allTypes };
    }
    case 'ExportAllDeclaration':
    case 'ExportNamedDeclaration': {
      const specifier = text(source?.value);
      return specifier === null ? null : { specifier, typeOnly: node.exportKind === 'type' };
    }
    case 'ImportExpression': {
      const specifier = text(source?.value);
      return specifier === null ? null : { specifier, typeOnly: false };
    }
    case 'TSImportType': {
      const specifier = text(source?.value);
      return specifier === null ? null : { specifier, typeOnly: true };
    }
    case 'CallExpression': {
      const callee = node.callee as Node;
      const [first] = node.arguments as { value?: unknown }[];
      const specifier = callee.name === 'require' ? text(first?.value) : null;
      return specifier === null ? null : { specifier, typeOnly: false };
    }
    default:
      return null;
  }
}

/** Everything that a file imports or passes on, statically, by `import()`, `require` or as a type. */
export function importsOf(file: SourceFile, tree = parse(file)): Import[] {
  const found: Import[] = [];
  each(tree, (node) => {
    const named = specifierOf(node);
    if (!named) return;
    const inside = named.specifier.startsWith('.') || named.specifier.startsWith('@/');
    const to = inside ? resolveInside(file.path, named.specifier) : named.specifier;
    found.push({ to, inside, typeOnly: named.typeOnly });
  });
  return found;
}

/** Whether the file begins with this directive, as `'use client'`. */
export function hasDirective(tree: Node, directive: string): boolean {
  return (tree.body as Node[]).some((n) => n.directive === directive);
}
