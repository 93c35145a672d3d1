import { type MarkState, VerdictLabel } from '@/components/marks';

/** Mark and word of a run, and how the verdict came to be where it was not computed. */
export function RunVerdict(props: {
  mark: MarkState | null;
  way: 'computed' | 'overruled' | 'published' | null;
  /** word for a run that nothing is said of yet */
  open: string;
}) {
  const { mark, way, open } = props;
  if (!mark) return <span className="text-ink2">{open}</span>;
  return (
    <span className="inline-flex flex-wrap items-center gap-x-2">
      <VerdictLabel state={mark} />
      {way && way !== 'computed' ? <span className="text-caption text-ink2">{way}</span> : null}
    </span>
  );
}
