import type { ReactNode } from 'react';

/** A plain caution, on every page that sets doses. */
export function Caution({ children }: { children?: ReactNode }) {
  return (
    <p role="note" className="border-l-[3px] border-ink bg-plate px-4 py-2 text-caption text-ink2">
      <strong className="font-semibold text-ink">Caution. </strong>
      {children ?? (
        <>
          Predictions are estimates from a model. They replace no protocol, licence, ethics
          decision, local code or qualified supervision.
        </>
      )}
    </p>
  );
}
