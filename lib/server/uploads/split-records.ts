/** The records of a delimited text with the line on which each begins, blank ones left out. */
export type Records = { header: string; records: string[]; lines: number[] };

/** Whether a quotation mark opened at the start of a field is still open at the end of `text`. */
function staysOpen(text: string, delimiter: string): boolean {
  let open = false;
  for (let i = 0; i < text.length; i += 1) {
    if (text[i] !== '"') continue;
    if (!open) {
      open = i === 0 || text[i - 1] === delimiter || text[i - 1] === '\n';
    } else if (text[i + 1] === '"') {
      i += 1;
    } else {
      const next = text[i + 1];
      if (next === undefined || next === delimiter || next === '\n') open = false;
    }
  }
  return open;
}

/** A record that holds nothing but delimiters, quotation marks and blanks. */
const isBlank = (record: string, delimiter: string) =>
  record.replaceAll(delimiter, '').replaceAll('"', '').trim() === '';

/** Lines of one quoted cell beyond which its quotation mark is taken for a stray one. */
const LONGEST_CELL = 50;

/**
 * Cuts a text into records without reading their cells, so that a large file can be read in parts. A
 * line break inside quotation marks does not end a record.
 */
export function splitRecords(text: string, delimiter: string): Records {
  const all = text
    .replace(/^\uFEFF/, '')
    .replace(/\r\n?/g, '\n')
    .split('\n');
  const records: string[] = [];
  const lines: number[] = [];
  for (let i = 0; i < all.length; i += 1) {
    const begin = i;
    let record = all[i]!;
    if (record.includes('"')) {
      while (staysOpen(record, delimiter) && i - begin < LONGEST_CELL && i + 1 < all.length) {
        i += 1;
        record += `\n${all[i]!}`;
      }
    }
    if (isBlank(record, delimiter)) continue;
    records.push(record);
    lines.push(begin + 1);
  }
  const header = records.shift() ?? '';
  lines.shift();
  return { header, records, lines };
}
