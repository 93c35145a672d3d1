'use client';

import { useMemo, useState } from 'react';
import { Select } from '@/components/forms';
import { Key, Plate } from '@/components/ui';
import type { UploadMapping } from '@/lib/contracts/forms/readings';
import { decodeText } from '@/lib/evidence/import/decode-text';
import { FileField, MOST_BYTES } from './file-field';
import {
  draftOf,
  faultsOf,
  type MappingDraft,
  noDraft,
  offeredDelimiter,
  previewOf,
  readDraft,
} from './mapping-draft';
import { MappingFields, type Readout } from './mapping-fields';
import { PreviewTable } from './preview-table';
import { UploadOutcome } from './upload-account';
import { useUpload } from './use-upload';

type Props = {
  studyId: string;
  /** runs with a setting */
  runs: { id: string; label: string }[];
  chosen: string | null;
  readouts: Readout[];
  zone: string;
  /** how the last file of this rig was read */
  mapping: UploadMapping | null;
  filled: boolean;
};

/** Bytes of the file that the preview reads. */
const HEAD_BYTES = 64 * 1024;

/** The beginning of a file, without the row that the cut runs through. */
async function headOf(file: File): Promise<string> {
  const bytes = new Uint8Array(await file.slice(0, HEAD_BYTES).arrayBuffer());
  const text = decodeText(bytes);
  if (file.size <= HEAD_BYTES) return text;
  const end = Math.max(text.lastIndexOf('\n'), text.lastIndexOf('\r'));
  return end > 0 ? text.slice(0, end) : text;
}

/** Choose the run and the file, declare how it is read, see its first rows, upload. */
export function UploadPanel(props: Props) {
  const { studyId, runs, readouts, zone, mapping } = props;
  const [runId, setRunId] = useState(props.chosen ?? runs[0]?.id ?? '');
  const [file, setFile] = useState<File | null>(null);
  const [head, setHead] = useState('');
  const [draft, setDraft] = useState<MappingDraft>(() =>
    mapping ? draftOf(mapping, zone) : noDraft(zone),
  );
  const [faults, setFaults] = useState<Record<string, string>>({});
  const { sent, send, clear } = useUpload(studyId);
  const preview = useMemo(() => previewOf(head, draft.delimiter), [head, draft.delimiter]);

  async function take(chosen: File) {
    clear();
    setFaults({});
    setFile(chosen);
    const text = await headOf(chosen);
    setHead(text);
    setDraft((d) => (d.delimiter === '' ? { ...d, delimiter: offeredDelimiter(text) } : d));
  }

  function submit(event: React.FormEvent) {
    event.preventDefault();
    const found: Record<string, string> = {};
    if (!file) found.file = 'Choose a file first.';
    else if (file.size > MOST_BYTES) {
      found.file = 'This file is larger than 50 MB. Split it, or leave out what is no reading.';
    }
    const read = readDraft(draft, preview.columns);
    if (!read.success && file) Object.assign(found, faultsOf(read.error.issues), found);
    setFaults(found);
    const first = Object.keys(found)[0];
    if (first) document.getElementById(first)?.focus();
    else if (file && read.success) void send({ file, runId, mapping: read.data });
  }

  return (
    <Plate title="Upload readings" id="upload" className="mt-6">
      <form noValidate onSubmit={submit} className="flex flex-col gap-4">
        <div className="grid gap-4 tablet:grid-cols-2">
          <Select
            id="runId"
            label="Run"
            hint="Only runs whose dose was set: times count from there."
            options={runs.map((r) => ({ value: r.id, label: r.label }))}
            value={runId}
            onChange={(event) => setRunId(event.target.value)}
          />
          <FileField onFile={(f) => void take(f)} problem={faults.file} />
        </div>
        {file ? (
          <>
            <MappingFields
              draft={draft}
              columns={preview.columns}
              readouts={readouts}
              faults={faults}
              onChange={(change) => setDraft((d) => ({ ...d, ...change }))}
            />
            <PreviewTable preview={preview} draft={draft} />
          </>
        ) : null}
        <Key
          type="submit"
          kind={props.filled ? 'filled' : 'outlined'}
          pending={sent.state === 'sending'}
          className="self-start"
        >
          {sent.state === 'sending' ? 'Uploading' : 'Upload'}
        </Key>
        <UploadOutcome sent={sent} studyId={studyId} />
      </form>
    </Plate>
  );
}
