import Papa from 'papaparse';
import { uploadById } from '@/db/queries/uploads';
import { notFound } from '@/lib/server/errors';
import { labRoute } from '@/lib/server/route';

type Params = { studyId: string; uploadId: string };

/** A leading sign that a spreadsheet would take for a formula is kept from being one. */
const plain = (cell: string | number) =>
  typeof cell === 'string' && /^[=+\-@\t\r]/.test(cell) ? `'${cell}` : cell;

/** The rows of a file that were refused, as a table: where, what, why and how to mend it. */
export const GET = labRoute<Params>('see', async ({ db, member, params }) => {
  const found = await uploadById(db, { labId: member.labId, ...params });
  if (!found) throw notFound('upload');
  const rows = found.problems.map((p) => [p.row, p.column, p.text, p.reason, p.mend].map(plain));
  const text = Papa.unparse({
    fields: ['row', 'column', 'text', 'reason', 'how to mend'],
    data: rows,
  });
  return new Response(`\uFEFF${text}\r\n`, {
    headers: {
      'content-type': 'text/csv; charset=utf-8',
      'content-disposition': `attachment; filename="refused-rows-${found.id}.csv"`,
      'cache-control': 'no-store',
    },
  });
});
