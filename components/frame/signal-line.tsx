import clsx from 'clsx';
import Link from 'next/link';
import { OpenSwitch } from '@/components/ui/glyphs';

export type Station = {
  name: string;
  href?: string;
  state: 'done' | 'partly' | 'current' | 'later';
  /** how far, in a few words */
  fact: string;
  /** something before this station is missing: the line stands open */
  missing?: boolean;
};

const STATE_WORD: Record<Station['state'], string> = {
  done: 'done',
  partly: 'partly done',
  current: 'here',
  later: 'not begun',
};

/** The order of the work on one line: what is done, where we are, and where the line is open. */
export function SignalLine({ stations }: { stations: Station[] }) {
  const here = Math.max(
    stations.findIndex((s) => s.state === 'current'),
    0,
  );
  return (
    <nav aria-label="Steps of the study" className="mt-[15px] print:hidden">
      <ol
        className="hidden tablet:grid"
        style={{
          gridTemplateColumns: `repeat(${Math.max(stations.length - 1, 1)}, minmax(0, 1fr)) minmax(62px, max-content)`,
        }}
      >
        {stations.map((station, i) => (
          <StationItem key={station.name} station={station} next={stations[i + 1]} />
        ))}
      </ol>
      <Brief stations={stations} here={here} />
    </nav>
  );
}

function StationItem({ station, next }: { station: Station; next: Station | undefined }) {
  const current = station.state === 'current';
  return (
    <li className="relative min-w-0">
      <StationName station={station} />
      <span className="mt-[5px] flex h-3 items-center" aria-hidden="true">
        <Square state={station.state} />
        {next ? <Segment next={next} /> : null}
      </span>
      <span
        className={clsx(
          'mt-[7px] truncate text-caption text-ink2 desk:block',
          next && 'pr-3',
          station.missing || station.state === 'partly' || current ? 'block' : 'hidden',
        )}
        title={station.fact}
      >
        {station.fact}
      </span>
    </li>
  );
}

function StationName({ station }: { station: Station }) {
  const current = station.state === 'current';
  const className = clsx(
    'block w-fit text-body leading-5 whitespace-nowrap',
    current ? 'font-bold text-index' : 'font-medium',
  );
  const words = (
    <>
      {station.name}
      <span className="sr-only">
        {`, ${STATE_WORD[station.state]}${station.missing ? ', something is missing before it' : ''}`}
      </span>
    </>
  );
  if (!station.href) return <span className={className}>{words}</span>;
  return (
    <Link
      href={station.href}
      aria-current={current ? 'step' : undefined}
      className={clsx(className, 'underline-offset-4 hover:underline')}
    >
      {words}
    </Link>
  );
}

function Square({ state }: { state: Station['state'] }) {
  const colour = state === 'current' ? 'var(--index)' : 'var(--ink)';
  return (
    <svg width={12} height={12} viewBox="0 0 12 12" className="shrink-0" aria-hidden="true">
      {state === 'done' || state === 'current' ? (
        <rect width={12} height={12} fill={colour} />
      ) : (
        <rect
          x={0.75}
          y={0.75}
          width={10.5}
          height={10.5}
          fill="none"
          stroke={colour}
          strokeWidth={1.5}
        />
      )}
      {state === 'partly' ? <path d="M0 0H12L0 12Z" fill={colour} /> : null}
    </svg>
  );
}

/** A stretch of the line, as long as there is room. */
function Stretch({ grow, dotted }: { grow?: number; dotted?: boolean }) {
  return (
    <svg
      height={12}
      className="w-0 min-w-0"
      style={{ flexGrow: grow ?? 1, flexBasis: 0 }}
      aria-hidden="true"
    >
      <path
        d={dotted ? 'M3 6H4000' : 'M0 6H4000'}
        stroke="var(--ink)"
        strokeWidth={1.5}
        strokeDasharray={dotted ? '1.5 3.5' : undefined}
      />
    </svg>
  );
}

function Segment({ next }: { next: Station }) {
  if (!next.missing) return <Stretch dotted={next.state === 'later'} />;
  return (
    <span className="flex min-w-0 flex-1 items-center text-ink">
      <Stretch grow={71} />
      <span className="-mt-[13px] flex">
        <OpenSwitch />
      </span>
      <Stretch grow={29} />
    </span>
  );
}

/** On a phone: where we are, of how many, and both neighbours. */
function Brief({ stations, here }: { stations: Station[]; here: number }) {
  const [before, now, after] = [stations[here - 1], stations[here], stations[here + 1]];
  const neighbour = 'min-h-6 text-caption text-ink2 underline underline-offset-4';
  return (
    <div className="flex items-baseline gap-4 tablet:hidden">
      {before?.href ? (
        <Link href={before.href} className={neighbour}>
          {before.name}
        </Link>
      ) : null}
      <span className="text-body font-bold text-index">
        {`${here + 1} of ${stations.length}, ${now?.name ?? ''}`}
      </span>
      {after?.href ? (
        <Link href={after.href} className={neighbour}>
          {after.name}
        </Link>
      ) : null}
    </div>
  );
}
