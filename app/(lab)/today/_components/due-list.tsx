import clsx from 'clsx';
import { VerdictMark } from '@/components/marks';
import { KeyLink } from '@/components/ui';
import { clockText, dayText, durationText, spanText } from '@/lib/format';
import { type DueState, isOverdue, sinceDoseText } from './due-order';

export type DueRow = {
  id: string;
  from: string;
  to: string;
  state: DueState;
  study: string;
  run: number;
  dose: string;
  what: string;
  /** minutes since the dose was set, or is to be; null when that is not known */
  sinceDose: number | null;
  rig: string;
  person: string;
  place: 'steady' | 'undecided' | 'sustained';
};

type ListProps = {
  title: string;
  rows: DueRow[];
  zone: string;
  now: string;
  /** Names stand beside the sessions when they are not all one's own. */
  whole: boolean;
  /** this person may record sessions */
  records: boolean;
  /** said where there are none; without it the list is left out */
  empty?: string;
  /** what is done: without weight, after everything else */
  quiet?: boolean;
};

const STATE_WORDS: Record<DueState, string> = {
  planned: '',
  started: 'started',
  done: 'done',
  missed: 'missed',
  suspended: 'held by a stop',
  cancelled: 'cancelled',
};

function keyName(row: DueRow, { records, now }: ListProps): string {
  if (!records || row.state === 'done' || row.state === 'suspended') return 'See it';
  if (row.state === 'started') return 'Go on';
  return row.from <= now ? 'Start' : 'Open';
}

/** Sessions in order of time; one press to start. */
export function DueList(props: ListProps) {
  if (props.rows.length === 0 && !props.empty) return null;
  return (
    <section>
      <h2 className="mb-2 text-section font-semibold">{props.title}</h2>
      {props.rows.length === 0 ? <p className="text-ink2">{props.empty}</p> : null}
      <ul
        className={clsx('rounded-key border border-rule empty:hidden', !props.quiet && 'bg-plate')}
      >
        {props.rows.map((row) => (
          <DueItem key={row.id} row={row} {...props} />
        ))}
      </ul>
    </section>
  );
}

function DueItem(props: ListProps & { row: DueRow }) {
  const { row, zone, now, quiet } = props;
  const overdue = isOverdue(row, now);
  const key = keyName(row, props);
  const here = key === 'Start' || key === 'Go on';
  return (
    <li
      className={clsx(
        'grid grid-cols-[minmax(0,1fr)_auto] items-center gap-x-4 gap-y-2 border-b border-rule px-4 last:border-b-0 tablet:grid-cols-[8.5rem_minmax(0,1fr)_auto]',
        quiet ? 'py-2' : 'py-3',
      )}
    >
      <div className="col-span-2 tablet:col-span-1">
        <p className={clsx('font-mono', !quiet && 'font-semibold')}>{clockText(row.from, zone)}</p>
        <p className="text-caption text-ink2">{dayText(row.from, zone)}</p>
        {overdue ? (
          <p className="text-caption font-semibold">
            {`${durationText(Math.floor((Date.parse(now) - Date.parse(row.from)) / 60_000))} overdue`}
          </p>
        ) : null}
      </div>
      <What {...props} />
      <KeyLink href={`/sessions/${row.id}`} kind={here ? 'filled' : 'outlined'}>
        {key}
        <span className="sr-only">{`: run ${row.run}, ${row.what}`}</span>
      </KeyLink>
    </li>
  );
}

function What({ row, zone, whole, quiet }: ListProps & { row: DueRow }) {
  const weight = quiet ? 'font-medium' : 'font-semibold';
  const facts = [
    row.sinceDose === null ? '' : sinceDoseText(row.sinceDose),
    spanText(row.from, row.to, zone),
    STATE_WORDS[row.state],
  ].filter(Boolean);
  return (
    <div className="min-w-0">
      <p className="flex flex-wrap items-center gap-x-3">
        <span className={clsx('inline-flex items-center gap-2 font-mono', weight)}>
          <VerdictMark state={row.state === 'suspended' ? 'stopped' : row.place} />
          {row.dose}
        </span>
        <span className={weight}>{row.what}</span>
      </p>
      <p className="truncate text-caption text-ink2" title={row.study}>
        {`Run ${row.run}, ${row.rig}${whole ? `, ${row.person}` : ''}; ${row.study}`}
      </p>
      <p className="text-caption text-ink2">{facts.join('; ')}</p>
    </div>
  );
}
