import clsx from 'clsx';
import { dayText, type Instant, spanText } from '@/lib/format';
import { DayClock, DayPointer } from './day-pointer';
import { dayScale, gaps, type Stretch } from './day-scale';

export type DaySession = {
  id: string;
  from: Instant;
  to: Instant;
  /** yours are solid, others' hollow */
  mine: boolean;
  title: string;
};

export type DayRuleProps = {
  /** the instant the page was made; the pointer goes on from there by itself */
  now: string;
  /** the lab's IANA zone */
  zone: string;
  sessions: DaySession[];
  /** the lab's open hours that touch this day; all else is hatched */
  open: { from: Instant; to: Instant }[];
};

const percent = (share: number) => `${Math.min(Math.max(share, 0), 1) * 100}%`;
const place = (s: Stretch) => ({
  left: percent(s.from),
  width: `calc(${percent(s.to)} - ${percent(s.from)})`,
});

/** The lab's day as a scale, on top of every page: time is what everyone shares. */
export function DayRule({ now, zone, sessions, open }: DayRuleProps) {
  const scale = dayScale(now, zone);
  const closed = gaps(open.map((o) => ({ from: scale.share(o.from), to: scale.share(o.to) })));
  const today = sessions
    .map((s) => ({ ...s, at: { from: scale.share(s.from), to: scale.share(s.to) } }))
    .filter((s) => s.at.to > 0 && s.at.from < 1);
  return (
    <section aria-label="The lab's day" className="h-10 border-b border-rule bg-well print:hidden">
      <div className="mx-auto flex h-full max-w-[1904px] items-stretch gap-2.5 px-4 tablet:px-8">
        <p className="shrink-0 self-center text-[14px] font-semibold whitespace-nowrap desk:w-[108px]">
          {dayText(now, zone)}
        </p>
        <div className="relative min-w-0 flex-1" aria-hidden="true">
          <ClosedHours closed={closed} />
          <Ticks ticks={scale.ticks} />
          {today.map((s) => (
            <span
              key={s.id}
              title={`${spanText(s.from, s.to, zone)} ${s.title}`}
              className={clsx(
                'absolute top-2.5 h-2.5 min-w-[3px] border border-ink',
                s.mine ? 'bg-ink' : 'bg-well',
              )}
              style={place(s.at)}
            />
          ))}
          <DayPointer now={now} zone={zone} />
        </div>
        <DayClock now={now} zone={zone} />
      </div>
      <ul className="sr-only">
        {today.map((s) => (
          <li key={s.id}>
            {`${s.mine ? 'Your session' : 'Session of others'} ${spanText(s.from, s.to, zone)}: ${s.title}`}
          </li>
        ))}
      </ul>
    </section>
  );
}

/** All that is not open: lines of 1.2 every 7, at 45°. */
function ClosedHours({ closed }: { closed: Stretch[] }) {
  return (
    <svg className="absolute top-0 left-0 h-6 w-full" aria-hidden="true">
      <defs>
        <pattern
          id="closed-hours"
          width={7}
          height={7}
          patternUnits="userSpaceOnUse"
          patternTransform="rotate(45)"
        >
          <path d="M3.5 0V7" stroke="var(--edge)" strokeOpacity={0.55} strokeWidth={1.2} />
        </pattern>
      </defs>
      {closed.map((s) => (
        <rect
          key={s.from}
          x={percent(s.from)}
          width={percent(s.to - s.from)}
          height={24}
          fill="url(#closed-hours)"
        />
      ))}
    </svg>
  );
}

const TICK = { three: 'h-[7px]', hour: 'h-[5px]', half: 'h-[3px] hidden tablet:block' } as const;

function Ticks({ ticks }: { ticks: ReturnType<typeof dayScale>['ticks'] }) {
  return (
    <>
      <span className="absolute inset-x-0 top-6 h-px bg-ink" />
      {ticks.map((t) => (
        <span key={t.key} className="absolute top-6" style={{ left: percent(t.share) }}>
          <span className={clsx('block w-px bg-ink', TICK[t.kind])} />
          {t.kind === 'three' ? (
            <span className="absolute top-px left-[4.5px] hidden font-mono text-scale text-ink2 tablet:block">
              {t.text}
            </span>
          ) : null}
        </span>
      ))}
    </>
  );
}
