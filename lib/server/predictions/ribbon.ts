import type { PredictionOutline } from '@/db/queries/predictions';
import type { LevelMark } from '@/db/queries/study-ribbons';
import type { Control, Cycle, EstimateAnswer, PredictAnswer, SystemModel } from '@/lib/contracts';
import { doseToControl } from '@/lib/sim/dose-map';

/** Control values and half swings of one readout, ascending; 0 at gentle onsets. */
export type Amplitudes = { control: number[]; value: number[] };

type OnsetPlace = {
  value: number;
  oscillates: 'above' | 'below';
  coexistence: { from: number; to: number } | null;
};

/** The readout whose swing stands for the oscillation: the first one. */
export const firstReadout = (model: SystemModel): { symbol: string; unit: string | null } => {
  const first = model.readouts?.[0] ?? model.variables[0];
  return { symbol: first?.symbol ?? '', unit: first?.unit ?? null };
};

/** Places on the way from a gentle onset to its nearest cycle, as shares of that cycle's amplitude. */
const SQUARE_ROOT_SHARES = [0.25, 0.5, 0.75];

/**
 * Half the swing of `readout` over each stable cycle; null where no stable cycle was found. Between a
 * gentle onset and its nearest cycle the amplitude goes like the square root of the distance.
 */
export function amplitudesOf(
  cycles: readonly Cycle[],
  readout: string,
  onsets: readonly OnsetPlace[],
): Amplitudes | null {
  const points = cycles.flatMap(({ control, stable, readouts }) => {
    const swing = readouts[readout];
    return stable && swing ? [{ control, value: (swing.max - swing.min) / 2 }] : [];
  });
  if (points.length === 0) return null;
  const gentle = onsets.filter((onset) => !onset.coexistence);
  const begin = gentle.flatMap((onset) => beginning(onset, points));
  points.push(...begin);
  points.sort((a, b) => a.control - b.control);
  return { control: points.map((p) => p.control), value: points.map((p) => p.value) };
}

type Point = { control: number; value: number };

/** Zero at a gentle onset, and the square root from there to the nearest cycle on its oscillating side. */
function beginning({ value: from, oscillates }: OnsetPlace, points: readonly Point[]): Point[] {
  const sign = oscillates === 'above' ? 1 : -1;
  const distance = (p: Point) => sign * (p.control - from);
  const nearest = points
    .filter((p) => distance(p) > 0)
    .reduce<Point | null>((a, b) => (a && distance(a) <= distance(b) ? a : b), null);
  const zero = { control: from, value: 0 };
  if (!nearest) return [zero];
  const curve = SQUARE_ROOT_SHARES.map((share) => ({
    control: from + (nearest.control - from) * share ** 2,
    value: nearest.value * share,
  }));
  return [zero, ...curve];
}

/** The ceiling dose as a control value and the side on which doses are forbidden. */
export function ceilingOnControl(
  control: Control,
  ceilingDose: number | null,
): { ceiling: number; ceilingSide: 'above' | 'below' } | null {
  if (ceilingDose === null) return null;
  const ceiling = doseToControl(control.doseMap, ceilingDose);
  if (ceiling === null) return null;
  const ceilingSide = fallingMap(control) ? 'below' : 'above';
  const { from, to } = control;
  if (ceilingSide === 'above' ? ceiling > to : ceiling < from) return null;
  return { ceiling: Math.min(Math.max(ceiling, from), to), ceilingSide };
}

const nominal = (n: number | { value: number } | undefined) =>
  (typeof n === 'object' ? n.value : n) ?? 0;

/** Whether more dose gives less of the control parameter. */
export function fallingMap({ doseMap: map }: Control): boolean {
  switch (map?.kind) {
    case undefined:
    case 'identity':
      return false;
    case 'linear':
      return nominal(map.slope) < 0;
    case 'hill-inhibition':
      return nominal(map.base) > nominal(map.floor);
    case 'hill-activation':
      return nominal(map.top) < nominal(map.base);
    case 'table': {
      const rising = (map.dose[1] ?? 0) > (map.dose[0] ?? 0);
      return nominal(map.value[1]) > nominal(map.value[0]) !== rising;
    }
  }
}

/** Quantiles at 5, 10 … 95 % of the draws that have the onset (linear interpolation). */
export function combOf(values: readonly number[]): number[] {
  const sorted = [...values].sort((a, b) => a - b);
  if (sorted.length < 2) return [];
  return Array.from({ length: 19 }, (_, i) => {
    const at = ((i + 1) / 20) * (sorted.length - 1);
    const low = Math.floor(at);
    const a = sorted[low] ?? 0;
    return a + (at - low) * ((sorted[low + 1] ?? a) - a);
  });
}

type Marks = { levels: readonly LevelMark[]; observed: EstimateAnswer['onsets'] };

const marksOf = ({ levels, observed }: Marks) => ({
  levels: levels.map(({ control, state, direction, runId }) => ({
    control,
    state,
    ...(direction ? { direction } : {}),
    ...(runId ? { id: runId } : {}),
  })),
  observed: observed.map((o) => o.onset),
});

/** Control values are named by the parameter's own label, else by its symbol. */
const axisOf = (model: SystemModel, control: Control) => {
  const parameter = model.parameters.find((p) => p.symbol === control.symbol);
  return {
    from: control.from,
    to: control.to,
    unit: parameter?.unit ?? '',
    label: parameter?.label || control.symbol,
  };
};

/** All that a list-size or card-size ribbon shows of a study. */
export function outlineRibbon(
  outline: PredictionOutline,
  study: { ceilingDose: number | null; systemNumber: number | null },
  marks: Marks,
) {
  const { control, model, cycles, onsets } = outline;
  const stale = study.systemNumber !== null && study.systemNumber !== outline.systemNumber;
  return {
    ...axisOf(model, control),
    onsets: onsets.map((o) => ({
      value: o.value,
      low: o.low ?? o.value,
      high: o.high ?? o.value,
      oscillates: o.oscillates,
      coexistence: o.coexistence,
    })),
    amplitude: amplitudesOf(cycles, firstReadout(model).symbol, onsets) ?? undefined,
    ...ceilingOnControl(control, study.ceilingDose),
    ...marksOf(marks),
    stale: stale ? `System v${outline.systemNumber}` : undefined,
  };
}

/** All that the page-size ribbon shows, with the comb of the draws. */
export function answerRibbon(
  prediction: { answer: PredictAnswer; model: SystemModel; control: Control; systemNumber: number },
  study: { ceilingDose: number | null; systemNumber: number | null },
  marks: Marks,
) {
  const { answer, model, control } = prediction;
  const stale = study.systemNumber !== null && study.systemNumber !== prediction.systemNumber;
  return {
    ...axisOf(model, control),
    onsets: answer.onsets.map((o) => ({
      value: o.value,
      low: o.spread?.low ?? o.value,
      high: o.spread?.high ?? o.value,
      oscillates: o.oscillates,
      quantiles: o.spread ? combOf(o.spread.values) : undefined,
      coexistence: o.coexistence,
    })),
    amplitude: amplitudesOf(answer.cycles, firstReadout(model).symbol, answer.onsets) ?? undefined,
    ...ceilingOnControl(control, study.ceilingDose),
    ...marksOf(marks),
    stale: stale ? `System v${prediction.systemNumber}` : undefined,
  };
}
