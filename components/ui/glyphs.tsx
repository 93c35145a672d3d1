/** The signal line that turns into a wave: the mark of the program. */
export function Logo({ width = 34 }: { width?: number }) {
  return (
    <svg width={width} height={(width * 20) / 34} viewBox="0 0 34 20" aria-hidden="true">
      <path
        d="M0 9.5H11.2C13 9.5 13.3 5 15.2 5S18 15.3 20 15.3 23 1.8 25 1.8 28.2 17.3 30.4 17.3C32.2 17.3 32.8 12.5 33.6 7"
        fill="none"
        stroke="currentColor"
        strokeWidth={1.9}
        strokeLinejoin="round"
      />
    </svg>
  );
}

/** An open switch in a line: something is missing here. */
export function OpenSwitch({ width = 41 }: { width?: number }) {
  return (
    <svg
      width={width}
      height={24}
      viewBox="0 0 41 24"
      aria-hidden="true"
      className="shrink-0 overflow-visible"
    >
      <circle cx={2.5} cy={18.5} r={2.5} fill="currentColor" />
      <path d="M2.5 18.5L33 6" stroke="currentColor" strokeWidth={1.5} />
      <circle cx={37.5} cy={18.5} r={2.6} fill="none" stroke="currentColor" strokeWidth={1.5} />
    </svg>
  );
}
