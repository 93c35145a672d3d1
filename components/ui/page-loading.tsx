import { LoadingRibbon } from './loading-ribbon';

/** A page on its way, at its final size: rule, ticks and a flat line; words only when it lasts. */
export function PageLoading({ what, tall = false }: { what: string; tall?: boolean }) {
  return (
    <div className="rounded-key border border-rule bg-plate py-4">
      <LoadingRibbon size={tall ? 'page' : 'card'} what={what} />
    </div>
  );
}
