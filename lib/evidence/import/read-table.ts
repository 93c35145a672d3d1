import Papa from 'papaparse';
import type { ImportProblem } from './mapping';

/** Largest table that is read at once. */
export const MAX_CHARACTERS = 100_000_000;
export const MAX_ROWS = 500_000;

export type Table = { header: string[]; body: string[][]; problems: ImportProblem[] };

/**
 * Splits text into header and rows. Takes off a byte order mark, any line ends, quotes. Text that is
 * no table gives an empty body and a problem that says why.
 */
export function readTable(text: string, delimiter: string, limit = MAX_ROWS): Table {
  const clean = text.startsWith('\uFEFF') ? text.slice(1) : text;
  const refusal = refuse(clean);
  if (refusal) return { header: [], body: [], problems: [refusal] };
  const parsed = Papa.parse<string[]>(clean, {
    delimiter,
    skipEmptyLines: 'greedy',
    preview: limit + 2,
  });
  const problems: ImportProblem[] = parsed.errors
    .filter((e) => e.type === 'Quotes')
    .slice(0, 20)
    .map((e) => ({
      row: (e.row ?? 0) + 1,
      column: '',
      text: '',
      reason: 'A quotation mark is opened and not closed properly here.',
      mend: 'Close the quotation mark, or double it where it belongs to the text.',
    }));
  const header = (parsed.data[0] ?? []).map((c) => c.trim());
  const body = parsed.data.slice(1, limit + 1);
  if (parsed.data.length > limit + 1) {
    problems.push(
      fileProblem(
        `The table has more than ${limit.toLocaleString('en')} rows; the rest was not read.`,
        'Split the file, or leave out rows and columns that are not needed.',
      ),
    );
  }
  return { header, body, problems };
}

function refuse(text: string): ImportProblem | null {
  if (text.trim() === '') {
    return fileProblem('The file is empty.', 'Export the table again and upload it.');
  }
  if (text.length > MAX_CHARACTERS) {
    return fileProblem(
      `The file has ${Math.round(text.length / 1e6)} million characters; at most ${MAX_CHARACTERS / 1e6} million are read.`,
      'Split it into several files.',
    );
  }
  const head = text.slice(0, 20_000);
  let odd = 0;
  for (let i = 0; i < head.length; i++) {
    const code = head.charCodeAt(i);
    if (code === 0xfffd || code === 0) odd += 5;
    else if (code < 32 && code !== 9 && code !== 10 && code !== 13) odd++;
  }
  if (odd > 0.01 * head.length) {
    return fileProblem(
      'This is no text table: it holds characters that no text has.',
      'Export the table as CSV or tab-separated text in UTF-8 and upload that file.',
    );
  }
  return null;
}

export function fileProblem(reason: string, mend: string): ImportProblem {
  return { row: 0, column: '', text: '', reason, mend };
}
