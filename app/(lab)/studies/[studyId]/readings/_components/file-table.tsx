import Link from 'next/link';
import { type Column, DataTable } from '@/components/ui';
import type { uploadList } from '@/db/queries/uploads';
import { stampText } from '@/lib/format';

type Row = Awaited<ReturnType<typeof uploadList>>[number];

const size = (bytes: number) =>
  bytes < 1024 * 1024
    ? `${Math.max(1, Math.round(bytes / 1024))}\u202fkB`
    : `${(bytes / 1024 / 1024).toFixed(1)}\u202fMB`;

function columns(studyId: string, zone: string): Column<Row>[] {
  return [
    { key: 'file', head: 'File', strong: true, cell: (u) => u.fileName },
    {
      key: 'run',
      head: 'Run',
      cell: (u) => (
        <Link
          href={`/studies/${studyId}/readings?run=${u.runId}`}
          className="underline underline-offset-4"
        >
          Run {u.runNumber}
        </Link>
      ),
    },
    { key: 'by', head: 'By', cell: (u) => u.by },
    { key: 'at', head: 'When', cell: (u) => stampText(u.createdAt, zone) },
    { key: 'kept', head: 'Kept', kind: 'figure', cell: (u) => u.kept },
    {
      key: 'refused',
      head: 'Refused',
      kind: 'figure',
      cell: (u) =>
        u.refused > 0 ? (
          <a
            href={`/api/v1/studies/${studyId}/uploads/${u.id}/problems`}
            className="underline underline-offset-4"
          >
            {u.refused}
          </a>
        ) : (
          0
        ),
    },
    { key: 'size', head: 'Size', kind: 'figure', cell: (u) => size(u.bytes) },
    {
      key: 'hash',
      head: 'SHA-256',
      cell: (u) => (
        <span className="font-mono text-caption" title={u.sha256}>
          {u.sha256.slice(0, 12)}…
        </span>
      ),
    },
  ];
}

/** The files as they came, unchanged: who, when, and by which hash they are known. */
export function FileTable(props: { studyId: string; files: Row[]; zone: string }) {
  if (props.files.length === 0) return null;
  return (
    <section className="mt-8">
      <h2 className="mb-3 text-section font-semibold">Files</h2>
      <DataTable
        caption="Uploaded files"
        columns={columns(props.studyId, props.zone)}
        rows={props.files}
        rowKey={(u) => u.id}
      />
    </section>
  );
}
