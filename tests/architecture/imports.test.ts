import { describe, expect, test } from 'vitest';
import { importBreaches } from './import-rules';
import { importsOf, type SourceFile, sourceFiles } from './source';

const files = sourceFiles();
const breachesOf = (path: string, text: string) => importBreaches({ path, text });

/** A breach for each line; `path` needs not exist, what it imports is resolved from there. */
const bad: [rule: string, path: string, text: string][] = [
  ['contracts import zod alone', 'lib/contracts/x.ts', `import { DateTime } from 'luxon';`],
  ['contracts know no engine', 'lib/contracts/x.ts', `import '../sim/predict';`],
  ['sim knows contracts alone', 'lib/sim/x.ts', `import { design } from '@/lib/planner/design';`],
  ['sim knows no server', 'lib/sim/x.ts', `export * from '../server/env';`],
  ['planner knows no evidence', 'lib/planner/a/x.ts', `import '../../evidence/judge/judge';`],
  ['evidence knows no planner', 'lib/evidence/a/x.ts', `import type { A } from '@/lib/planner/a';`],
  ['rehearsal knows no server', 'lib/rehearsal/x.ts', `import '@/lib/server/env';`],
  ['db knows the engine by type only', 'db/x.ts', `import { predict } from '@/lib/sim/predict';`],
  ['db knows no server', 'db/x.ts', `import type { Member } from '@/lib/server/member';`],
  ['server knows no page', 'lib/server/x.ts', `import '@/app/layout';`],
  ['server knows no component', 'lib/server/x.ts', `import '@/components/ui';`],
  ['components know no database', 'components/x.tsx', `import type { Role } from '@/db/schema';`],
  ['components know no server', 'components/a/x.tsx', `import '../../lib/server/env';`],
  ['pages know no test', 'app/x.ts', `import { a } from '@/tests/setup/nothing';`],
  ['pages know no script', 'app/x.ts', `await import('@/scripts/worker');`],
  ['server knows no test', 'lib/server/x.ts', `require('../../tests/setup/nothing');`],
  ['the engine has no React', 'lib/sim/x.ts', `import { cache } from 'react';`],
  ['the engine has no Next', 'lib/planner/x.ts', `import { after } from 'next/server';`],
  ['the engine has no database', 'lib/evidence/x.ts', `import { eq } from 'drizzle-orm';`],
  ['the engine reads no files', 'lib/sim/x.ts', `import { readFileSync } from 'node:fs';`],
  ['nor under the old names', 'lib/sim/x.ts', `import { readFileSync } from 'fs';`],
  [
    'folders of app stay apart',
    'app/(lab)/today/page.tsx',
    `import { A } from '../calendar/_components/calendar-room';`,
  ],
  [
    'a folder does not reach into one below',
    'app/(lab)/studies/page.tsx',
    `import { A } from './new/_components/origin-fields';`,
  ],
  [
    'a leaf knows no type of the database',
    'app/(lab)/today/_components/x.tsx',
    `'use client';\nimport type { Role } from '@/db/schema';`,
  ],
];

const good: [path: string, text: string][] = [
  ['lib/contracts/x.ts', `import { z } from 'zod'; import { a } from './common';`],
  ['lib/planner/x.ts', `import { a } from '@/lib/sim/dose-map';`],
  ['db/x.ts', `import type { A } from '@/lib/sim/predict';`],
  ['db/y.ts', `import { type A, type B } from '@/lib/planner/a';`],
  ['scripts/x.ts', `import '@/app/layout'; import '@/lib/server/env';`],
  ['app/(lab)/studies/new/page.tsx', `import { f } from '../_components/study-fields';`],
  ['app/(lab)/studies/new/_components/x.tsx', `'use client';\nimport { a } from '../actions';`],
];

describe('who may import whom', () => {
  test.each(bad)('%s', (_rule, path, text) => {
    expect(breachesOf(path, text)).not.toEqual([]);
  });

  test.each(good)('%s may import what its floor stands on', (path, text) => {
    expect(breachesOf(path, text)).toEqual([]);
  });

  test('comments and texts that look like imports are none', () => {
    const text = `// import '@/lib/server/env'\nconst s = "import '@/db/client'";`;
    expect(importsOf({ path: 'lib/sim/x.ts', text })).toEqual([]);
  });

  test('holds in every file of the project', () => {
    expect(files.length).toBeGreaterThan(300);
    const inside = (f: SourceFile) => !f.path.startsWith('tests/');
    expect(files.filter(inside).flatMap(importBreaches)).toEqual([]);
  });

  test('every import inside the project names a file that is there', () => {
    const known = new Set(files.map((f) => f.path));
    const missing = files.flatMap((f) =>
      importsOf(f)
        .filter((i) => i.inside && /^(app|components|db|lib|tests)\//.test(i.to))
        .filter((i) => !known.has(i.to) && !/\.(css|json)$/.test(i.to))
        .map((i) => `${f.path} imports ${i.to}`),
    );
    expect(missing).toEqual([]);
  });
});
