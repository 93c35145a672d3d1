import { type UploadMapping, uploadMapping } from '@/lib/contracts/forms/readings';
import { previewTable } from '@/lib/evidence/import/preview';
import { readTable } from '@/lib/evidence/import/read-table';

/** The declarations as they stand in the form; empty text is not declared yet. */
export type MappingDraft = {
  delimiter: string;
  decimalMark: string;
  timeColumn: string;
  timeKind: string;
  timeUnit: string;
  timeZone: string;
  dateFormat: string;
  /** Column → readout; empty: not used. */
  readouts: Record<string, string>;
  missingMarks: string;
  belowLimitMark: string;
};

export const noDraft = (zone: string): MappingDraft => ({
  delimiter: '',
  decimalMark: '',
  timeColumn: '',
  timeKind: '',
  timeUnit: '',
  timeZone: zone,
  dateFormat: '',
  readouts: {},
  missingMarks: '',
  belowLimitMark: '',
});

/** How the last file of this rig was read, to begin from. */
export function draftOf(mapping: UploadMapping, zone: string): MappingDraft {
  return {
    delimiter: mapping.delimiter,
    decimalMark: mapping.decimalMark,
    timeColumn: mapping.timeColumn,
    timeKind: mapping.timeKind,
    timeUnit: mapping.timeUnit ?? '',
    timeZone: mapping.timeZone ?? zone,
    dateFormat: mapping.dateFormat ?? '',
    readouts: Object.fromEntries(mapping.valueColumns.map((v) => [v.column, v.readout])),
    missingMarks: (mapping.missingMarks ?? []).join(' '),
    belowLimitMark: mapping.belowLimitMark ?? '',
  };
}

const orNone = (text: string) => (text.trim() === '' ? undefined : text.trim());

/** The declarations checked; only columns that the file has are taken. */
export function readDraft(draft: MappingDraft, columns: string[]) {
  const elapsed = draft.timeKind === 'elapsed';
  return uploadMapping.safeParse({
    delimiter: draft.delimiter,
    decimalMark: draft.decimalMark,
    timeColumn: columns.includes(draft.timeColumn) ? draft.timeColumn : '',
    timeKind: draft.timeKind,
    ...(elapsed
      ? { timeUnit: orNone(draft.timeUnit) }
      : { timeZone: orNone(draft.timeZone), dateFormat: orNone(draft.dateFormat) }),
    valueColumns: columns.flatMap((column) => {
      const readout = draft.readouts[column];
      return readout && column !== draft.timeColumn ? [{ column, readout }] : [];
    }),
    missingMarks: draft.missingMarks.split(/\s+/).filter(Boolean),
    belowLimitMark: orNone(draft.belowLimitMark),
  });
}

/** Problems of the draft by field, the first of each, as sentences. */
export function faultsOf(issues: { path: PropertyKey[]; message: string }[]) {
  const faults: Record<string, string> = {};
  for (const { path, message } of issues) {
    const field = String(path[0] ?? 'file');
    faults[field] ??= `${message[0]?.toUpperCase() ?? ''}${message.slice(1)}.`;
  }
  return faults;
}

export type Preview = { columns: string[]; rows: string[][]; problem: string | null };
export const PREVIEW_ROWS = 20;

/** First rows as they stand, cut by the declared delimiter. */
export function previewOf(head: string, delimiter: string): Preview {
  if (head === '' || delimiter === '') return { columns: [], rows: [], problem: null };
  const { header, body, problems } = readTable(head, delimiter, PREVIEW_ROWS);
  const stopper = header.length === 0 ? problems.find((p) => p.row === 0) : undefined;
  return {
    columns: [...new Set(header)],
    rows: body,
    problem: stopper ? `${stopper.reason} ${stopper.mend}` : null,
  };
}

/** The delimiter that cuts the first rows most evenly: offered where none was declared before. */
export const offeredDelimiter = (head: string) => previewTable(head).delimiter;
