import { readTable } from './read-table';

export type TablePreview = {
  /** The delimiter that splits the first rows most evenly: a proposal to confirm, nothing more. */
  delimiter: ',' | ';' | '\t' | '|';
  columns: string[];
  /** The first 20 rows as they stand. */
  rows: string[][];
  /** What stops the file from being read, if anything. */
  problem: string | null;
};

const DELIMITERS = ['\t', ';', ',', '|'] as const;

/** Columns and first rows for the mapping form. Nothing here is used to read values. */
export function previewTable(text: string): TablePreview {
  const head = text.slice(0, 200_000);
  const tried = DELIMITERS.map((delimiter) => {
    const table = readTable(head, delimiter, 20);
    const width = table.header.length;
    const even = table.body.filter((r) => r.length === width).length;
    const score = width > 1 ? width * (1 + even) : 0;
    return { delimiter, table, score };
  });
  const best = tried.reduce((a, b) => (b.score > a.score ? b : a), tried[2]!);
  const stopper = best.table.problems.find((p) => p.row === 0 && best.table.header.length === 0);
  return {
    delimiter: best.delimiter,
    columns: best.table.header,
    rows: best.table.body,
    problem: stopper ? `${stopper.reason} ${stopper.mend}` : null,
  };
}
