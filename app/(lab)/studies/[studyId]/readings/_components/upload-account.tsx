'use client';

import { useEffect, useRef } from 'react';
import { FormProblem } from '@/components/forms';
import { DataTable, keyClass } from '@/components/ui';
import type { UploadAccount } from '@/lib/contracts/forms/readings';
import type { Sent } from './use-upload';

/** Rows listed on the page; the download holds more. */
const SHOWN = 50;

const plural = (n: number, word: string) => `${n} ${word}${n === 1 ? '' : 's'}`;

function ProblemRows({ problems }: { problems: UploadAccount['problems'] }) {
  if (problems.length === 0) return null;
  const rows = problems.slice(0, SHOWN).map((p, i) => ({ ...p, key: `${i} ${p.row} ${p.column}` }));
  return (
    <div>
      <DataTable
        caption="Rows that were refused"
        columns={[
          {
            key: 'row',
            head: 'Row',
            kind: 'figure',
            cell: (p) => (p.row > 0 ? p.row : '\u2013'),
          },
          { key: 'column', head: 'Column', strong: true, cell: (p) => p.column || '\u2013' },
          {
            key: 'text',
            head: 'As it stands',
            cell: (p) => <span className="font-mono">{p.text}</span>,
          },
          {
            key: 'reason',
            head: 'What is wrong, and how to mend it',
            cell: (p) => (
              <span className="block min-w-64 py-1">
                {p.reason} <span className="text-ink2">{p.mend}</span>
              </span>
            ),
          },
        ]}
        rows={rows}
        rowKey={(p) => p.key}
      />
    </div>
  );
}

function Kept({ account, studyId }: { account: UploadAccount; studyId: string }) {
  const { kept, known, refused, problems, remarks, jobId, uploadId } = account;
  return (
    <>
      <p className="text-section font-semibold">
        {plural(kept, 'reading')} kept
        {known > 0 ? `, ${known} known before` : ''}
        {refused > 0 ? `, ${refused} refused` : ''}.
      </p>
      {remarks.map((remark) => (
        <p key={remark} className="border-l-[3px] border-ink pl-2">
          {remark}
        </p>
      ))}
      <p className="text-ink2">
        {jobId
          ? 'The verdicts and the onset are being worked out anew.'
          : 'There is no prediction to compare with yet, so nothing is judged.'}
      </p>
      {refused > 0 ? (
        <>
          <ProblemRows problems={problems} />
          <p className="flex flex-wrap items-center gap-3">
            <a
              className={keyClass('outlined')}
              href={`/api/v1/studies/${studyId}/uploads/${uploadId}/problems`}
            >
              Download the refused rows
            </a>
            {refused > SHOWN ? (
              <span className="text-ink2">
                The first {SHOWN} of {refused} are listed here, {problems.length} in the download.
              </span>
            ) : null}
          </p>
        </>
      ) : null}
    </>
  );
}

/** What became of the file, row by row; focus goes there. */
export function UploadOutcome({ sent, studyId }: { sent: Sent; studyId: string }) {
  const box = useRef<HTMLDivElement>(null);
  const over = sent.state === 'kept' || sent.state === 'refused';
  useEffect(() => {
    if (over) box.current?.focus();
  }, [over]);
  if (!over) return null;
  return (
    <div ref={box} tabIndex={-1} className="flex flex-col gap-3" aria-live="polite">
      {sent.state === 'kept' ? (
        <Kept account={sent.account} studyId={studyId} />
      ) : (
        <>
          <FormProblem
            problems={{ what: sent.refusal.problem.message, how: sent.refusal.problem.mend }}
          />
          <ProblemRows problems={sent.refusal.rows.filter((p) => p.row > 0)} />
        </>
      )}
    </div>
  );
}
