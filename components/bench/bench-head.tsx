import { unitText } from '@/lib/format';

export type BenchHeadProps = {
  /** vessel, well or volunteer's code */
  identity: string;
  /** study and run */
  line: string;
  /** dose in bench units, in print; absent on a blinded card */
  dose?: string;
  /** UCUM code of the dose */
  doseUnit?: string;
  /** control value in print and its UCUM code */
  control?: { value: string; unit: string };
  /** "day 12, hour 277" */
  when: string;
  /** a blinded card shows this code and neither dose nor control value */
  blindCode?: string;
};

/** Who is treated, at the left; how much, at the right. */
export function BenchHead(props: BenchHeadProps) {
  const { identity, line, dose, doseUnit, control, when, blindCode } = props;
  const blind = blindCode !== undefined;
  return (
    <div className="flex flex-wrap justify-between gap-x-8 gap-y-3 tablet:min-h-[84px]">
      <div className="min-w-0">
        <h1 className="text-identity font-semibold break-words">{identity}</h1>
        <p className="mt-[5px] text-bench text-ink2">{line}</p>
      </div>
      <div className="min-w-0 tablet:text-right">
        <p className="font-mono text-identity font-semibold">
          {blind ? (
            <>
              <span className="sr-only">Level </span>
              {blindCode}
            </>
          ) : (
            <>
              <span className="sr-only">Dose </span>
              {dose ?? '\u2013'}
              <span className="ml-4 text-[24px] font-medium">{unitText(doseUnit)}</span>
            </>
          )}
        </p>
        <p className="mt-[5px] text-bench text-ink2">
          {!blind && control ? (
            <>
              <span className="font-mono">{`${control.value} `}</span>
              {`${unitText(control.unit)}, `}
            </>
          ) : null}
          {when}
        </p>
      </div>
    </div>
  );
}
