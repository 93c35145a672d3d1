import { type Breach, each, hasDirective, type Node, parse, type SourceFile } from './source';

/** Actions that need no member: they end a session, or begin one. */
const WITHOUT_MEMBER = ['app/(lab)/sign-out.ts'];

/** The names under which a file imports `name` from `module`. */
function importedAs(tree: Node, module: string, name: string): string[] {
  return (tree.body as Node[])
    .filter(
      (n) => n.type === 'ImportDeclaration' && (n.source as { value: string }).value === module,
    )
    .flatMap((n) => n.specifiers as Node[])
    .filter((s) => ((s.imported as Node | undefined)?.name ?? '') === name)
    .map((s) => (s.local as Node).name as string);
}

const callOf = (node: unknown): string | null => {
  const call = node as Node | null;
  const callee = call?.type === 'CallExpression' ? (call.callee as Node) : null;
  return callee?.type === 'Identifier' ? (callee.name as string) : null;
};

/** Everything that a file exports as a value: its name, and whether it is a call of one of `by`. */
function exportsOf(tree: Node, by: string[]): { name: string; made: boolean }[] {
  const found: { name: string; made: boolean }[] = [];
  for (const n of tree.body as Node[]) {
    if (n.type === 'ExportDefaultDeclaration' || n.type === 'ExportAllDeclaration') {
      found.push({ name: n.type, made: false });
    }
    if (n.type !== 'ExportNamedDeclaration' || n.exportKind === 'type') continue;
    const declared = n.declaration as Node | null;
    if (declared?.type === 'VariableDeclaration') {
      for (const d of declared.declarations as Node[]) {
        const made = by.includes(callOf(d.init) ?? '');
        found.push({ name: String((d.id as Node).name), made });
      }
    } else if (declared?.type === 'FunctionDeclaration') {
      found.push({ name: String((declared.id as Node).name), made: false });
    }
    for (const s of (n.specifiers as Node[] | undefined) ?? []) {
      found.push({ name: String((s.exported as Node).name), made: false });
    }
  }
  return found;
}

/** Every action goes through the one door that asks for session, role and shape of input. */
export function actionBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  let inline = false;
  each(tree, (node) => {
    const body = (node.body as Node | undefined)?.body;
    if (!/Function/.test(node.type) || !Array.isArray(body)) return;
    if ((body as Node[]).some((s) => s.directive === 'use server')) inline = true;
  });
  const breaches = inline ? [{ path: file.path, what: 'an action inside a component' }] : [];
  if (!hasDirective(tree, 'use server') || WITHOUT_MEMBER.includes(file.path)) return breaches;
  const by = importedAs(tree, '@/lib/server/action', 'labAction');
  const loose = exportsOf(tree, by).filter((e) => !e.made);
  return [
    ...breaches,
    ...loose.map((e) => ({ path: file.path, what: `the action ${e.name} is no labAction` })),
  ];
}

const METHODS = ['GET', 'HEAD', 'POST', 'PUT', 'PATCH', 'DELETE', 'OPTIONS'];

/** Every route below app/api/v1 goes through labRoute, which asks for session, role and origin. */
export function routeBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  if (!/^app\/api\/v1\/.*route\.tsx?$/.test(file.path)) return [];
  const by = importedAs(tree, '@/lib/server/route', 'labRoute');
  const methods = exportsOf(tree, by).filter(
    (e) => METHODS.includes(e.name) || e.name.startsWith('Export'),
  );
  const none = methods.length === 0 ? [{ path: file.path, what: 'exports no method' }] : [];
  return [
    ...none,
    ...methods
      .filter((e) => !e.made)
      .map((e) => ({ path: file.path, what: `${e.name} is no labRoute` })),
  ];
}

/** A page asks who is there itself; the layout's question is not asked again on every navigation. */
export function pageBreaches(file: SourceFile, tree = parse(file)): Breach[] {
  if (!/^app\/\((lab|bench)\)\/.*page\.tsx$/.test(file.path)) return [];
  const names = importedAs(tree, '@/lib/server/member', 'pageMember');
  let asks = false;
  each(tree, (node) => {
    if (node.type !== 'AwaitExpression') return;
    if (names.includes(callOf(node.argument) ?? '')) asks = true;
  });
  return asks ? [] : [{ path: file.path, what: 'does not call pageMember' }];
}
