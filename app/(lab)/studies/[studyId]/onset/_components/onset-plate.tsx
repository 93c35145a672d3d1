import { JoinedPlate, type Observation } from '@/components/charts';
import type { ObservedOnset, SystemModel } from '@/lib/contracts';
import { markOf, type RunRow } from '@/lib/server/evidence/run-rows';
import { type answerRibbon, firstReadout } from '@/lib/server/predictions/ribbon';

type Props = {
  ribbon: ReturnType<typeof answerRibbon>;
  model: SystemModel;
  rows: RunRow[];
  onsets: ObservedOnset[];
};

/** A steady record swings by nothing that can be told from noise: its mark stands on the baseline. */
const FLAT = { value: 0, low: 0, high: 0 };

function observationsOf(rows: RunRow[], readout: string): Observation[] {
  let named = false;
  return rows.flatMap((r) => {
    const { verdict } = r;
    if (!verdict || (r.readout !== null && r.readout !== readout)) return [];
    const flat = verdict === 'steady' && r.way === 'computed' ? FLAT : null;
    const measure = r.amplitude ?? flat;
    const label =
      measure && (verdict === 'undecided' || (verdict === 'sustained' && !named))
        ? verdict
        : undefined;
    if (label === 'sustained') named = true;
    return [{ id: r.id, control: r.control, state: verdict, measure, label }];
  });
}

/** The page ribbon with what was observed, joined with predicted and observed amplitudes. */
export function OnsetPlate({ ribbon, model, rows, onsets }: Props) {
  const readout = firstReadout(model);
  // The verdict that counts: an overruled or published one before what was computed.
  const markFor = new Map(rows.map((r) => [r.id, markOf(r)]));
  const levels = ribbon.levels.map((l) => {
    const mark = l.id ? markFor.get(l.id) : null;
    return mark ? { ...l, state: mark } : l;
  });
  const amplitude = ribbon.amplitude;
  return (
    <JoinedPlate
      {...ribbon}
      levels={levels}
      observed={onsets.map((o) => o.onset)}
      chart={{
        amplitudeUnit: readout.unit ?? '',
        ...(amplitude
          ? { predicted: { control: amplitude.control, amplitude: amplitude.value } }
          : {}),
        observations: observationsOf(rows, readout.symbol),
      }}
    />
  );
}
