import { unitText } from '@/lib/format';

export type BenchHeadProps = {
  /** vessel, well or volunteer's code */
  identity: string;
  /** the study; cut with an ellipsis where there is no room */
  line: string;
  /** what of that line is never cut: ", run 7" */
  tail?: string;
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
  const { identity, line, tail, dose, doseUnit, control, when, blindCode } = props;
  const blind = blindCode !== undefined;
  return (
    <div className="grid gap-x-8 gap-y-3 tablet:h-[84px] tablet:grid-cols-[minmax(0,1fr)_auto]">
      <div className="min-w-0">
        <h1 className="truncate text-identity font-semibold" title={identity}>
          {identity}
        </h1>
        <p className="mt-[5px] flex text-bench text-ink2" title={`${line}${tail ?? ''}`}>
          <span className="truncate">{line}</span>
          <span className="shrink-0 whitespace-pre">{tail}</span>
        </p>
      </div>
      <div className="min-w-0 whitespace-nowrap tablet:text-right">
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
              <span className="font-mono">{control.value}</span>
              {unitText(control.unit) === '' ? ', ' : `\u202f${unitText(control.unit)}, `}
            </>
          ) : null}
          {when}
        </p>
      </div>
    </div>
  );
}
