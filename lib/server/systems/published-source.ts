import { type LibraryModel, library } from '@/lib/sim/library';

/** A source as it is cited: "Sel'kov EE (1968). Self-oscillations …. Eur J Biochem 4:79–86." */
export function citationOf({ authors, year, title, where }: LibraryModel['source']): string {
  return `${authors} (${year}). ${title}. ${where}.`;
}

/** Where a study's first system came from, and what in it is not from there; null when not published. */
export function publishedSource(
  libraryId: string,
): { title: string; citation: string; provenance: string } | null {
  const entry = library.find((m) => m.id === libraryId);
  if (!entry) return null;
  const { title, source, provenance } = entry;
  return { title, citation: citationOf(source), provenance };
}
