import { VerdictMark } from '@/components/marks';
import { KeyLink } from '@/components/ui';
import { clockText, dayText, spanText } from '@/lib/format';

export type DueRow = {
  id: string;
  from: string;
  to: string;
  state: string;
  study: string;
  run: number;
  dose: string;
  what: string;
  /** Planned minutes since the dose was set. */
  sinceDose: number;
  rig: string;
  person: string;
  place: 'steady' | 'undecided' | 'sustained';
};

const MINUTES_A_DAY = 1440;

/** "day 3, 07:00 h since dose": the count that gets lost at the bench. */
export function sinceDoseText(minutes: number): string {
  const day = Math.floor(minutes / MINUTES_A_DAY);
  const rest = Math.round(minutes - day * MINUTES_A_DAY);
  const hours = String(Math.floor(rest / 60)).padStart(2, '0');
  const left = String(rest % 60).padStart(2, '0');
  return `day ${day}, ${hours}:${left} h since dose`;
}

function keyName(row: DueRow): string {
  if (row.state === 'done') return 'See it';
  if (row.state === 'started') return 'Go on';
  return 'Start';
}

/** Sessions in order of time; one press to start. */
export function DueList(props: {
  title: string;
  rows: DueRow[];
  zone: string;
  now: string;
  /** Names stand beside the sessions when they are not all one's own. */
  whole: boolean;
}) {
  const { title, rows, zone, now, whole } = props;
  if (rows.length === 0) return null;
  return (
    <section>
      <h2 className="mb-2 text-section font-semibold">{title}</h2>
      <ul className="rounded-key border border-rule bg-plate">
        {rows.map((row) => {
          const due = row.from <= now && row.state === 'planned';
          return (
            <li
              key={row.id}
              className="grid grid-cols-[8.5rem_minmax(0,1fr)_auto] items-center gap-x-4 border-b border-rule px-4 py-3 last:border-b-0"
            >
              <div>
                <p className="font-mono font-semibold">{clockText(row.from, zone)}</p>
                <p className="text-caption text-ink2">{dayText(row.from, zone)}</p>
              </div>
              <div className="min-w-0">
                <p className="flex flex-wrap items-center gap-x-3">
                  <span className="inline-flex items-center gap-2 font-mono font-semibold">
                    <VerdictMark state={row.state === 'suspended' ? 'stopped' : row.place} />
                    {row.dose}
                  </span>
                  <span className="font-semibold">{row.what}</span>
                </p>
                <p className="text-caption text-ink2">
                  {row.study}, run {row.run}, {row.rig}
                  {whole ? `, ${row.person}` : ''}
                </p>
                <p className="text-caption text-ink2">
                  {sinceDoseText(row.sinceDose)}; {spanText(row.from, row.to, zone)}
                  {row.state === 'planned'
                    ? ''
                    : `; ${row.state === 'suspended' ? 'held by a stop' : row.state}`}
                </p>
              </div>
              <KeyLink href={`/sessions/${row.id}`} kind={due ? 'filled' : 'outlined'}>
                {keyName(row)}
              </KeyLink>
            </li>
          );
        })}
      </ul>
    </section>
  );
}
