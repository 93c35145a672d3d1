export type TimeTrackProps = {
  /** all in ms; the track runs from `from` to `to` */
  from: number;
  to: number;
  now: number;
  due: number;
  earliest: number;
  latest: number;
};

/** Straight track of time: the window shaded, a tick at due, the index at now. */
export function TimeTrack(props: TimeTrackProps) {
  const { from, to } = props;
  const share = (t: number) => (to > from ? Math.min(1, Math.max(0, (t - from) / (to - from))) : 0);
  const percent = (t: number) => `${share(t) * 100}%`;
  const [now, earliest, latest] = [share(props.now), share(props.earliest), share(props.latest)];
  return (
    <div className="relative mt-4 h-[26px]" aria-hidden="true">
      <div className="absolute inset-x-0 top-1 h-[11px] overflow-hidden border border-edge bg-well">
        <span
          className="absolute inset-y-0 bg-ink/25"
          style={{ left: `${earliest * 100}%`, width: `${Math.max(0, latest - earliest) * 100}%` }}
        />
        <span
          className="slide absolute inset-y-0 left-0 bg-index"
          style={{ width: `${now * 100}%` }}
        />
      </div>
      <span
        className="absolute top-0 h-[19px] w-0.5 -translate-x-1/2 bg-ink"
        style={{ left: percent(props.due) }}
      />
      <svg
        width={14}
        height={11}
        viewBox="0 0 14 11"
        aria-hidden="true"
        className="slide absolute top-[15px] -ml-[7px]"
        style={{ left: percent(props.now) }}
      >
        <path d="M0 11L7 0L14 11Z" fill="var(--index)" />
      </svg>
    </div>
  );
}
