import type { RunState, SeriesState, SessionState } from '../schema';

export const stationKeys = [
  'system',
  'prediction',
  'series',
  'sessions',
  'readings',
  'onset',
] as const;
export type StationKey = (typeof stationKeys)[number];

/** One station of a study's signal line. `missing` says in words what the next one waits for. */
export type Station = {
  key: StationKey;
  name: string;
  state: 'done' | 'part' | 'later';
  fact: string;
  missing: string | null;
};

/** What is counted about one study; everything that its signal line says follows from this. */
export type StudyCounts = {
  systemNumber: number | null;
  prediction: { systemNumber: number; onsets: number } | null;
  predicting: 'queued' | 'running' | 'failed' | null;
  series: { number: number; state: SeriesState } | null;
  approvedSeries: number | null;
  sessions: Partial<Record<SessionState, number>>;
  runs: Partial<Record<RunState, number>>;
  runsRead: number;
  undecided: number;
  observedOnsets: number | null;
};

type Body = Omit<Station, 'key' | 'name'>;

const plural = (n: number, word: string) => `${n} ${word}${n === 1 ? '' : 's'}`;
const total = (counts: Partial<Record<string, number>>, except: string[] = []) =>
  Object.entries(counts).reduce(
    (sum, [state, n]) => sum + (except.includes(state) ? 0 : (n ?? 0)),
    0,
  );

function systemStation({ systemNumber }: StudyCounts): Body {
  if (systemNumber === null) return { state: 'later', fact: 'none yet', missing: 'a system' };
  return { state: 'done', fact: `v${systemNumber}`, missing: null };
}

function predictionStation(counts: StudyCounts): Body {
  const { prediction, predicting, systemNumber } = counts;
  if (predicting === 'queued' || predicting === 'running') {
    return { state: 'part', fact: 'being worked out', missing: prediction ? null : 'a prediction' };
  }
  if (!prediction) {
    const fact = predicting === 'failed' ? 'failed' : 'none yet';
    return { state: 'later', fact, missing: 'a prediction' };
  }
  if (prediction.systemNumber !== systemNumber) {
    const fact = `from System v${prediction.systemNumber}`;
    return { state: 'part', fact, missing: 'a prediction from the newest system' };
  }
  const fact = prediction.onsets === 0 ? 'no onset' : plural(prediction.onsets, 'onset');
  return { state: 'done', fact, missing: prediction.onsets === 0 ? 'a predicted onset' : null };
}

function seriesStation({ series, approvedSeries }: StudyCounts): Body {
  if (!series) return { state: 'later', fact: 'none yet', missing: 'a series' };
  const fact = `v${series.number}, ${series.state}`;
  if (series.state === 'approved') return { state: 'done', fact, missing: null };
  if (approvedSeries === null) return { state: 'part', fact, missing: 'an approved series' };
  return { state: 'part', fact, missing: null };
}

function sessionsStation({ sessions }: StudyCounts): Body {
  const all = total(sessions, ['cancelled']);
  if (all === 0) return { state: 'later', fact: 'none yet', missing: 'sessions' };
  const over = sessions.done ?? 0;
  const open = (sessions.planned ?? 0) + (sessions.started ?? 0) + (sessions.suspended ?? 0);
  const held = sessions.suspended ?? 0;
  const fact = held > 0 ? `${held} of ${all} held` : `${over} of ${all} done`;
  return { state: open === 0 ? 'done' : 'part', fact, missing: null };
}

function readingsStation({ runs, runsRead, undecided }: StudyCounts): Body {
  const all = total(runs, ['cancelled', 'lost']);
  if (runsRead === 0) return { state: 'later', fact: 'none yet', missing: 'readings' };
  const recorded = (runs.recorded ?? 0) >= all && runsRead >= all;
  const fact = undecided > 0 ? `${undecided} undecided` : `${plural(runsRead, 'run')} of ${all}`;
  const missing = undecided > 0 ? `a verdict on ${plural(undecided, 'run')}` : null;
  return { state: recorded && undecided === 0 ? 'done' : 'part', fact, missing };
}

function onsetStation({ observedOnsets, prediction }: StudyCounts): Body {
  if (observedOnsets === null) return { state: 'later', fact: 'not yet observed', missing: null };
  if (observedOnsets === 0) return { state: 'part', fact: 'a bound only', missing: null };
  const wanted = Math.max(prediction?.onsets ?? 0, observedOnsets);
  const state = observedOnsets >= wanted ? 'done' : 'part';
  return { state, fact: `${observedOnsets} of ${wanted} observed`, missing: null };
}

/** The six stations, in the order of the work. */
export function stationsOf(counts: StudyCounts): Station[] {
  return [
    { key: 'system', name: 'System', ...systemStation(counts) },
    { key: 'prediction', name: 'Prediction', ...predictionStation(counts) },
    { key: 'series', name: 'Series', ...seriesStation(counts) },
    { key: 'sessions', name: 'Sessions', ...sessionsStation(counts) },
    { key: 'readings', name: 'Readings', ...readingsStation(counts) },
    { key: 'onset', name: 'Onset', ...onsetStation(counts) },
  ];
}

/**
 * The first station that the work still waits at; -1 when it waits for nothing. What was passed over
 * and is behind later results (published verdicts need no sessions) holds nothing up.
 */
export function waitingAt(stations: readonly Station[]): number {
  const begun = stations.map((s) => s.state !== 'later').lastIndexOf(true);
  return stations.findIndex((s, i) => s.missing !== null && (s.state !== 'later' || i > begun));
}

/** How far a study is: its last station that is done or begun, else its first. */
export function reachedStation(stations: readonly Station[]): Station {
  const begun = stations.filter((s) => s.state !== 'later');
  const last = begun.at(-1) ?? stations[0];
  if (!last) throw new RangeError('a signal line has at least one station');
  return last;
}
