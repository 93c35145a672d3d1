import type { RibbonData } from '@/components/ribbon';
import type { PredictionOutline } from '@/db/queries/predictions';
import type { StudyRow } from '@/db/queries/studies';
import type { Control, SystemModel } from '@/lib/contracts';
import { outlineRibbon } from '@/lib/server/predictions/ribbon';

type Published = { id: string; model: SystemModel; control: Control };
export type PredictedHere = { studyId: string; title: string; ribbon: RibbonData };

/**
 * A prediction that this lab already has of the model exactly as published, or null: a new one takes
 * minutes and is never worked out while a page waits.
 */
export function predictedHere(
  published: Published,
  studies: readonly StudyRow[],
  outlines: ReadonlyMap<string, PredictionOutline>,
): PredictedHere | null {
  const same = JSON.stringify([published.model, published.control]);
  for (const study of studies) {
    const outline = study.libraryId === published.id ? outlines.get(study.id) : undefined;
    if (!outline || JSON.stringify([outline.model, outline.control]) !== same) continue;
    const ribbon = outlineRibbon(
      outline,
      { ceilingDose: null, systemNumber: null },
      { levels: [], observed: [] },
    );
    return { studyId: study.id, title: study.title, ribbon };
  }
  return null;
}
