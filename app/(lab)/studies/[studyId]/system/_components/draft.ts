import type { Control, DoseMap, MapNumber, Spread, SystemModel } from '@/lib/contracts';

/** A system as its form holds it: every number still as typed. */
export type SpreadDraft = { kind: 'none' | Spread['kind']; a: string; b: string };
export type VariableDraft = {
  key: string;
  symbol: string;
  start: string;
  unit: string;
  label: string;
  nonnegative: boolean;
  equation: string;
};
export type ParameterDraft = {
  key: string;
  symbol: string;
  value: string;
  unit: string;
  label: string;
  spread: SpreadDraft;
};
export type ReadoutDraft = {
  key: string;
  symbol: string;
  expression: string;
  unit: string;
  noiseSd: string;
};
export type MapNumberDraft = { value: string; spread: SpreadDraft };
export type MapKey = 'slope' | 'offset' | 'base' | 'top' | 'ec50' | 'hill' | 'floor';
export type TableRowDraft = { key: string; dose: string; value: MapNumberDraft };
export type DoseMapDraft = {
  kind: DoseMap['kind'];
  numbers: Record<MapKey, MapNumberDraft>;
  rows: TableRowDraft[];
};
export type SystemDraft = {
  name: string;
  timeUnit: string;
  variables: VariableDraft[];
  parameters: ParameterDraft[];
  readouts: ReadoutDraft[];
  control: { symbol: string; from: string; to: string };
  doseMap: DoseMapDraft;
};

/** The numbers that each kind of dose map asks for, in the order of its formula. */
export const MAP_KEYS: Record<DoseMap['kind'], MapKey[]> = {
  identity: [],
  linear: ['slope', 'offset'],
  'hill-inhibition': ['base', 'floor', 'ec50', 'hill'],
  'hill-activation': ['base', 'top', 'ec50', 'hill'],
  table: [],
};
const ALL_KEYS: MapKey[] = ['slope', 'offset', 'base', 'top', 'ec50', 'hill', 'floor'];

let made = 0;
/** A key that holds a row's identity while rows come and go. */
export const rowKey = () => {
  made += 1;
  return `row-${made}`;
};

export const noSpread = (): SpreadDraft => ({ kind: 'none', a: '', b: '' });
export const emptyMapNumber = (value = ''): MapNumberDraft => ({ value, spread: noSpread() });
export const emptyVariable = (): VariableDraft => ({
  key: rowKey(),
  symbol: '',
  start: '0',
  unit: '',
  label: '',
  nonnegative: true,
  equation: '',
});
export const emptyParameter = (): ParameterDraft => ({
  key: rowKey(),
  symbol: '',
  value: '',
  unit: '',
  label: '',
  spread: noSpread(),
});
export const emptyReadout = (): ReadoutDraft => ({
  key: rowKey(),
  symbol: '',
  expression: '',
  unit: '',
  noiseSd: '',
});
export const emptyTableRow = (): TableRowDraft => ({
  key: rowKey(),
  dose: '',
  value: emptyMapNumber(),
});

function spreadDraft(spread: Spread | undefined): SpreadDraft {
  if (!spread) return noSpread();
  if (spread.kind === 'normal') return { kind: 'normal', a: String(spread.sd), b: '' };
  if (spread.kind === 'lognormal') return { kind: 'lognormal', a: String(spread.cv), b: '' };
  return { kind: 'uniform', a: String(spread.low), b: String(spread.high) };
}

function mapNumberDraft(entry: MapNumber | undefined): MapNumberDraft {
  if (entry === undefined) return emptyMapNumber();
  if (typeof entry === 'number') return emptyMapNumber(String(entry));
  return { value: String(entry.value), spread: spreadDraft(entry.spread) };
}

function doseMapDraft(map: DoseMap | undefined): DoseMapDraft {
  const given = (map ?? {}) as Partial<Record<MapKey, MapNumber>>;
  const numbers = Object.fromEntries(
    ALL_KEYS.map((key) => [key, mapNumberDraft(given[key])]),
  ) as Record<MapKey, MapNumberDraft>;
  if (map?.kind === 'hill-inhibition' && map.floor === undefined) numbers.floor.value = '0';
  const rows =
    map?.kind === 'table'
      ? map.dose.map((dose, i) => ({
          key: rowKey(),
          dose: String(dose),
          value: mapNumberDraft(map.value[i]),
        }))
      : [emptyTableRow(), emptyTableRow()];
  return { kind: map?.kind ?? 'identity', numbers, rows };
}

/** The form's content for a system that is already there. */
export function draftOf(model: SystemModel, control: Control): SystemDraft {
  return {
    name: model.name,
    timeUnit: model.timeUnit,
    variables: model.variables.map((v) => ({
      key: rowKey(),
      symbol: v.symbol,
      start: String(v.start),
      unit: v.unit ?? '',
      label: v.label ?? '',
      nonnegative: v.nonnegative === true,
      equation: model.equations[v.symbol] ?? '',
    })),
    parameters: model.parameters.map((p) => ({
      key: rowKey(),
      symbol: p.symbol,
      value: String(p.value),
      unit: p.unit ?? '',
      label: p.label ?? '',
      spread: spreadDraft(p.spread),
    })),
    readouts: (model.readouts ?? []).map((r) => ({
      key: rowKey(),
      symbol: r.symbol,
      expression: r.expression,
      unit: r.unit ?? '',
      noiseSd: r.noiseSd === undefined ? '' : String(r.noiseSd),
    })),
    control: {
      symbol: control.symbol,
      from: String(control.from),
      to: String(control.to),
    },
    doseMap: doseMapDraft(control.doseMap),
  };
}
