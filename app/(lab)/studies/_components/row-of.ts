import type { RibbonData } from '@/components/ribbon';
import type { PredictionOutline } from '@/db/queries/predictions';
import type { StudyRow } from '@/db/queries/studies';
import type { LevelMark } from '@/db/queries/study-ribbons';
import { reachedStation, type Station, waitingAt } from '@/db/queries/study-stations';
import type { EstimateAnswer } from '@/lib/contracts';
import { decimalsFor, figure, intervalText, withUnit } from '@/lib/format';
import { outlineRibbon } from '@/lib/server/predictions/ribbon';

/** One study as the list shows it. */
export type StudyListRow = {
  id: string;
  title: string;
  summary: string;
  perturbs: string;
  simulated: boolean;
  ribbon: RibbonData | null;
  predicted: string[];
  observed: string[];
  reached: { name: string; fact: string };
  missing: string | null;
};

type Facts = {
  stations: Station[];
  outline: PredictionOutline | null;
  levels: LevelMark[];
  observed: EstimateAnswer['onsets'];
};

type Place = { value: number; low: number | null; high: number | null };

/** "0.151 (0.112–0.208) /d", or the value alone where there is no band. */
export function placeText({ value, low, high }: Place, unit: string | null): string {
  if (low === null || high === null || low === high) return withUnit(figure(value, 3), unit);
  const decimals = Math.max(0, decimalsFor((high - low) / 2));
  return intervalText({ value, low, high }, { unit, decimals });
}

export function rowOf(study: StudyRow, facts: Facts): StudyListRow {
  const { stations, outline, levels, observed } = facts;
  const systemNumber = Number(stations[0]?.fact.slice(1)) || null;
  const ribbon = outline
    ? outlineRibbon(outline, { ceilingDose: study.ceilingDose, systemNumber }, { levels, observed })
    : null;
  const unit = ribbon?.unit ?? null;
  const reached = stations.length > 0 ? reachedStation(stations) : null;
  return {
    id: study.id,
    title: study.title,
    summary: study.summary,
    perturbs: study.perturbs,
    simulated: study.simulated,
    ribbon,
    predicted: outline?.onsets.map((o) => placeText(o, unit)) ?? [],
    observed: observed.map((o) => placeText(o.onset, unit)),
    reached: { name: reached?.name ?? '', fact: reached?.fact ?? '' },
    missing: stations[waitingAt(stations)]?.missing ?? null,
  };
}
