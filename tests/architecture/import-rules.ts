import type { Breach, Import, SourceFile } from './source';
import { hasDirective, importsOf, parse } from './source';

type Floor = { at: string; inside: string[]; types?: string[]; packages?: string[] };

/** From whom each floor may import: folders of the project, folders for types alone, packages. */
const floors: Floor[] = [
  { at: 'lib/contracts/', inside: ['lib/contracts/'], packages: ['zod'] },
  { at: 'lib/sim/', inside: ['lib/sim/', 'lib/contracts/'] },
  { at: 'lib/planner/', inside: ['lib/planner/', 'lib/sim/', 'lib/contracts/'] },
  { at: 'lib/evidence/', inside: ['lib/evidence/', 'lib/sim/', 'lib/contracts/'] },
  {
    at: 'lib/rehearsal/',
    inside: ['lib/rehearsal/', 'lib/planner/', 'lib/evidence/', 'lib/sim/', 'lib/contracts/'],
  },
  { at: 'lib/format/', inside: ['lib/format/', 'lib/contracts/'] },
  { at: 'lib/server/', inside: ['lib/', 'db/'] },
  {
    at: 'db/',
    inside: ['db/', 'lib/contracts/'],
    types: ['lib/sim/', 'lib/planner/', 'lib/evidence/'],
  },
  {
    at: 'components/',
    inside: [
      'components/',
      'lib/contracts/',
      'lib/format/',
      'lib/sim/',
      'lib/planner/',
      'lib/evidence/',
    ],
  },
  { at: 'app/', inside: ['app/', 'components/', 'lib/', 'db/'] },
];

const under = (path: string, folders: string[] | undefined) =>
  (folders ?? []).some((f) => path.startsWith(f));

/** Rule 1: who may import whom. Scripts and tests may import anything; the others never them. */
export function floorBreaches(path: string, imports: Import[]): Breach[] {
  const floor = floors.find((f) => path.startsWith(f.at));
  if (!floor) return [];
  return imports
    .filter((i) =>
      i.inside
        ? !under(i.to, floor.inside) && !(i.typeOnly && under(i.to, floor.types))
        : floor.packages !== undefined && !floor.packages.includes(i.to),
    )
    .map((i) => ({ path, what: `${floor.at} may not import ${i.to}` }));
}

const PURE = ['lib/contracts/', 'lib/sim/', 'lib/planner/', 'lib/evidence/', 'lib/rehearsal/'];
const IMPURE = /^(next|next-auth|react|react-dom|drizzle-orm|mysql2|nodemailer)(\/|$)|^node:/;
const BUILT_IN = /^(fs|path|os|http|https|net|crypto|child_process|worker_threads|process)(\/|$)/;

/** Rule 2, of packages: the pure floors know neither framework, database nor machine. */
export function pureImportBreaches(path: string, imports: Import[]): Breach[] {
  if (!under(path, PURE)) return [];
  return imports
    .filter((i) => !i.inside && (IMPURE.test(i.to) || BUILT_IN.test(i.to)))
    .map((i) => ({ path, what: `a pure floor may not import ${i.to}` }));
}

export const isPure = (path: string) => under(path, PURE);

/** The folder of a route that a file of `app` belongs to: its own without `_components`. */
const routeOf = (path: string) =>
  path
    .slice(0, path.lastIndexOf('/'))
    .replace(/\/_components(\/.*)?$/, '')
    .concat('/');

/** Rule 3: a folder of `app` uses its own files and those of the folders that it lies in. */
export function appBreaches(path: string, imports: Import[]): Breach[] {
  if (!path.startsWith('app/')) return [];
  return imports
    .filter((i) => i.inside && i.to.startsWith('app/') && !routeOf(path).startsWith(routeOf(i.to)))
    .map((i) => ({ path, what: `a folder of app may not import another one's ${i.to}` }));
}

/** What runs in the browser reaches neither database nor server, not even their types. */
export function clientBreaches(path: string, imports: Import[], client: boolean): Breach[] {
  if (!client) return [];
  return imports
    .filter((i) => i.inside && (i.to.startsWith('db/') || i.to.startsWith('lib/server/')))
    .map((i) => ({ path, what: `client code may not import ${i.to}` }));
}

/** Every breach of the import rules in one file. */
export function importBreaches(file: SourceFile): Breach[] {
  const tree = parse(file);
  const imports = importsOf(file, tree);
  const of = file.path;
  return [
    ...floorBreaches(of, imports),
    ...pureImportBreaches(of, imports),
    ...appBreaches(of, imports),
    ...clientBreaches(of, imports, hasDirective(tree, 'use client')),
  ];
}
