import { EngineError } from '@/lib/contracts/common';
import type { DoseMap, MapNumber, Spread } from '@/lib/contracts/model';
import { cubicAt, cubicInverse, monotoneCubic } from './monotone-cubic';
import { spreadQuantile } from './random/spread';

const at = 'control.doseMap';

/** The nominal number of a map's entry. */
export function mapValue(entry: MapNumber): number {
  return typeof entry === 'number' ? entry : entry.value;
}

/** What is wrong with a map, or null: EC50 and Hill steepness > 0, both axes strictly monotone. */
function problem(map: DoseMap): { message: string; at: string } | null {
  if (map.kind === 'identity') return null;
  if (map.kind === 'linear') {
    if (mapValue(map.slope) !== 0) return null;
    return { message: 'the slope is 0: no dose would change the control', at: `${at}.slope` };
  }
  if (map.kind === 'table') return tableProblem(map);
  for (const key of ['ec50', 'hill'] as const) {
    if (!(mapValue(map[key]) > 0)) {
      return { message: `${key} is ${mapValue(map[key])}: it must be above 0`, at: `${at}.${key}` };
    }
  }
  const [none, full] = hillEnds(map);
  if (none !== full) return null;
  return { message: 'both ends of the map are equal: no dose would change the control', at };
}

function tableProblem(map: Extract<DoseMap, { kind: 'table' }>) {
  const { dose, value } = map;
  if (dose.length !== value.length || dose.length < 2) {
    const message = `the table has ${dose.length} doses and ${value.length} values: give as many of each, two or more`;
    return { message, at: `${at}.value` };
  }
  const monotone = (list: readonly number[]) => {
    const sign = Math.sign(list[1]! - list[0]!);
    const index = list.findIndex((x, i) => i > 0 && !(sign * (x - list[i - 1]!) > 0));
    return index < 0 ? null : index;
  };
  for (const [key, list] of [
    ['dose', dose],
    ['value', value.map(mapValue)],
  ] as const) {
    const index = monotone(list);
    if (index !== null) {
      const message = `the table's ${key} column must rise or fall throughout; row ${index + 1} breaks it`;
      return { message, at: `${at}.${key}.${index}` };
    }
  }
  return null;
}

/** Throws EngineError `invalid-request` for a map that is not strictly monotone. */
export function checkDoseMap(map: DoseMap | undefined): void {
  const wrong = map ? problem(map) : null;
  if (wrong) throw new EngineError('invalid-request', wrong.message, wrong.at);
}

type HillMap = Extract<DoseMap, { kind: 'hill-inhibition' | 'hill-activation' }>;

/** The control at dose 0 and the control that a very large dose tends to. */
function hillEnds(map: HillMap): [number, number] {
  return map.kind === 'hill-inhibition'
    ? [mapValue(map.base), mapValue(map.floor ?? 0)]
    : [mapValue(map.base), mapValue(map.top)];
}

function tableCurve(map: Extract<DoseMap, { kind: 'table' }>) {
  const rows = map.dose.map((d, i) => [d, mapValue(map.value[i]!)] as const);
  rows.sort((a, b) => a[0] - b[0]);
  return monotoneCubic(
    rows.map((r) => r[0]),
    rows.map((r) => r[1]),
  );
}

/** The control that a dose gives; null where the map says nothing (beyond a table, below dose 0 of a Hill curve). */
export function doseToControl(map: DoseMap | undefined, dose: number): number | null {
  checkDoseMap(map);
  if (!map || map.kind === 'identity') return dose;
  if (map.kind === 'linear') return mapValue(map.slope) * dose + mapValue(map.offset);
  if (map.kind === 'table') return cubicAt(tableCurve(map), dose);
  if (dose < 0) return null;
  const [none, full] = hillEnds(map);
  const occupied = 1 / (1 + (mapValue(map.ec50) / dose) ** mapValue(map.hill));
  return none + (full - none) * occupied;
}

/** The dose that gives a control value; null = no dose reaches it. */
export function controlToDose(map: DoseMap | undefined, value: number): number | null {
  checkDoseMap(map);
  if (!map || map.kind === 'identity') return value;
  if (map.kind === 'linear') return (value - mapValue(map.offset)) / mapValue(map.slope);
  if (map.kind === 'table') return cubicInverse(tableCurve(map), value);
  const [none, full] = hillEnds(map);
  if (value === none) return 0;
  const ratio = (value - none) / (full - value);
  if (!(ratio > 0) || !Number.isFinite(ratio)) return null;
  const dose = mapValue(map.ec50) * ratio ** (1 / mapValue(map.hill));
  return Number.isFinite(dose) ? dose : null;
}

/** The entries of a map that carry a spread, in a fixed order; as many deviates does one draw take. */
export function doseMapSpreads(map: DoseMap | undefined): Spread[] {
  const found: Spread[] = [];
  eachNumber(map, (entry) => {
    if (typeof entry !== 'number') found.push(entry.spread);
    return mapValue(entry);
  });
  return found;
}

/**
 * One draw of a map: every spread number replaced by its quantile at the next of `uniforms` (each in (0, 1), in
 * the order of `doseMapSpreads`). null = the draw is no valid map, so no dose of it is reachable.
 */
export function sampleDoseMap(
  map: DoseMap | undefined,
  uniforms: ArrayLike<number>,
): DoseMap | null {
  let next = 0;
  const drawn = eachNumber(map, (entry) => {
    if (typeof entry === 'number') return entry;
    const u = uniforms[next];
    next += 1;
    return spreadQuantile(entry.value, entry.spread, u ?? 0.5);
  });
  return problem(drawn) ? null : drawn;
}

function eachNumber(map: DoseMap | undefined, take: (entry: MapNumber) => number): DoseMap {
  switch (map?.kind) {
    case undefined:
    case 'identity':
      return { kind: 'identity' };
    case 'linear':
      return { kind: 'linear', slope: take(map.slope), offset: take(map.offset) };
    case 'table':
      return { kind: 'table', dose: map.dose, value: map.value.map(take) };
    case 'hill-inhibition':
      return {
        kind: 'hill-inhibition',
        base: take(map.base),
        ec50: take(map.ec50),
        hill: take(map.hill),
        floor: take(map.floor ?? 0),
      };
    case 'hill-activation':
      return {
        kind: 'hill-activation',
        base: take(map.base),
        top: take(map.top),
        ec50: take(map.ec50),
        hill: take(map.hill),
      };
  }
}
