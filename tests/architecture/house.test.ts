import { getTableColumns, getTableName, is } from 'drizzle-orm';
import { MySqlTable } from 'drizzle-orm/mysql-core';
import { describe, expect, test } from 'vitest';
import * as schema from '@/db/schema';
import { actionBreaches, pageBreaches, routeBreaches } from './house-rules';
import { hasDirective, parse, sourceFiles } from './source';

const files = sourceFiles();
const at = (path: string, text: string) => ({ path, text });

describe('every action', () => {
  const head = `'use server';\nimport { labAction } from '@/lib/server/action';\n`;
  test.each([
    ['a bare function', `${head}export async function save() {}`],
    ['an arrow', `${head}export const save = async () => {};`],
    ['another wrapper', `${head}const wrap = (f: () => void) => f;\nexport const save = wrap(f);`],
    [
      'a look-alike',
      `'use server';\nimport { labAction } from './mine';\nexport const a = labAction({});`,
    ],
    ['something passed on', `${head}const save = async () => {};\nexport { save };`],
    ['a whole module passed on', `${head}export * from './other';`],
    [
      'a function inside a component',
      `export function A() { async function f() { 'use server'; } }`,
    ],
  ])('is seen not to be one: %s', (_what, text) => {
    expect(actionBreaches(at('app/(lab)/x/actions.ts', text))).not.toEqual([]);
  });

  test('made by labAction is let through', () => {
    const text = `${head}export const save = labAction({ action: 'see' });\nexport type A = 1;`;
    expect(actionBreaches(at('app/(lab)/x/actions.ts', text))).toEqual([]);
  });

  test('is a labAction, signing out excepted', () => {
    const doors = files.filter((f) => hasDirective(parse(f), 'use server'));
    expect(doors.length).toBeGreaterThan(8);
    expect(files.flatMap((f) => actionBreaches(f))).toEqual([]);
  });
});

describe('every route of the interface', () => {
  const path = 'app/api/v1/x/route.ts';
  test.each([
    ['a bare method', `export async function GET() { return new Response(); }`],
    ['another wrapper', `import { labRoute } from './mine';\nexport const POST = labRoute('see');`],
    ['a method passed on', `export { GET } from './other';`],
    ['no method', `export const dynamic = 'force-dynamic';`],
  ])('is seen not to be one: %s', (_what, text) => {
    expect(routeBreaches(at(path, text))).not.toEqual([]);
  });

  test('goes through labRoute', () => {
    const routes = files.filter((f) => /^app\/api\/v1\/.*route\.tsx?$/.test(f.path));
    expect(routes.length).toBeGreaterThan(0);
    expect(routes.flatMap((f) => routeBreaches(f))).toEqual([]);
  });
});

describe('every page of the lab and the bench', () => {
  test.each([
    ['that does not ask', `export default function Page() { return null; }`],
    [
      'that imports the question and does not put it',
      `import { pageMember } from '@/lib/server/member';\nexport default function P() { pageMember; }`,
    ],
    [
      'that asks and does not wait',
      `import { pageMember } from '@/lib/server/member';\nexport default function P() { pageMember(); }`,
    ],
  ])('%s is seen', (_what, text) => {
    expect(pageBreaches(at('app/(lab)/x/page.tsx', text))).not.toEqual([]);
    expect(pageBreaches(at('app/(bench)/x/page.tsx', text))).not.toEqual([]);
    expect(pageBreaches(at('app/(auth)/sign-in/page.tsx', text))).toEqual([]);
  });

  test('asks who is there', () => {
    const pages = files.filter((f) => /^app\/\((lab|bench)\)\/.*page\.tsx$/.test(f.path));
    expect(pages.length).toBeGreaterThan(10);
    expect(pages.flatMap((f) => pageBreaches(f))).toEqual([]);
  });
});

describe('every table', () => {
  /** Belong to no lab: labs and users themselves, the worker's beat, counts of attempts by address. */
  const shared = ['lab', 'user', 'worker_beat', 'rate_count'];
  const withoutLab = (tables: MySqlTable[]) =>
    tables
      .filter((t) => !shared.includes(getTableName(t)))
      .filter((t) => {
        const column = Object.values(getTableColumns(t)).find((c) => c.name === 'lab_id');
        return column?.notNull !== true;
      })
      .map(getTableName);

  test('without its lab’s id is seen', async () => {
    const { char, mysqlTable } = await import('drizzle-orm/mysql-core');
    const none = mysqlTable('loose', { id: char('id', { length: 36 }) });
    const loose = mysqlTable('loose', { labId: char('lab_id', { length: 36 }) });
    const good = mysqlTable('good', { labId: char('lab_id', { length: 36 }).notNull() });
    expect(withoutLab([none, good])).toEqual(['loose']);
    expect(withoutLab([loose, good])).toEqual(['loose']);
  });

  test('that holds a lab’s data names the lab', () => {
    const values: unknown[] = Object.values(schema);
    const tables = values.filter((t): t is MySqlTable => is(t, MySqlTable));
    expect(tables.length).toBeGreaterThan(20);
    expect(withoutLab(tables)).toEqual([]);
  });
});
