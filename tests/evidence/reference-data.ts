import { readFileSync } from 'node:fs';
import { join } from 'node:path';

/** Reads two numeric columns of a file in tests/reference (sources in tests/reference/SOURCES.md). */
export function referenceColumns(file: string, x: number, y: number): { x: number[]; y: number[] } {
  const text = readFileSync(join(import.meta.dirname, '..', 'reference', file), 'utf8');
  const rows = text.trim().split(/\r?\n/).slice(1);
  const cells = rows.map((row) => row.split(',').map(Number));
  return { x: cells.map((c) => c[x]!), y: cells.map((c) => c[y]!) };
}
