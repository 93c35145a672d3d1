'use client';

import { Field } from '@/components/forms';

/** Largest file that is taken, as the server has it. */
export const MOST_BYTES = 50 * 1024 * 1024;

/** A file, chosen or dropped on the field; it takes the keyboard like any other. */
export function FileField(props: { onFile: (file: File) => void; problem?: string }) {
  const { onFile, problem } = props;
  return (
    <Field
      id="file"
      label="File"
      hint="Choose it or drop it here: a text table, CSV or tab-separated, up to 50 MB. It is kept as it is."
      problem={problem}
    >
      <input
        id="file"
        type="file"
        accept=".csv,.tsv,.txt,text/csv,text/plain,text/tab-separated-values"
        aria-describedby={problem ? 'file-hint file-problem' : 'file-hint'}
        aria-invalid={problem ? true : undefined}
        className="w-full min-w-0 rounded-key border border-dashed border-edge bg-paper p-3 text-body file:mr-3 file:min-h-9 file:rounded-key file:border file:border-edge file:bg-plate file:px-3 file:font-semibold file:text-ink hover:border-ink"
        onChange={(event) => {
          const chosen = event.target.files?.[0];
          if (chosen) onFile(chosen);
        }}
      />
    </Field>
  );
}
