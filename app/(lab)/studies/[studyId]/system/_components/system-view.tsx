import { Equations } from '@/components/system/equations';
import { type Column, DataTable, Plate } from '@/components/ui';
import type { Control, DoseMap, MapNumber, Spread, SystemModel } from '@/lib/contracts';
import { figure, unitText, withUnit } from '@/lib/format';

const spreadText = (spread: Spread | undefined): string => {
  if (!spread) return 'exactly known';
  if (spread.kind === 'normal') return `normal, sd ${figure(spread.sd)}`;
  if (spread.kind === 'lognormal') return `lognormal, cv ${figure(spread.cv)}`;
  return `uniform, ${figure(spread.low)} to ${figure(spread.high)}`;
};

const mapNumberText = (n: MapNumber): string =>
  typeof n === 'number' ? figure(n) : `${figure(n.value)} (${spreadText(n.spread)})`;

/** A dose map in one line of print. */
export function doseMapText(map: DoseMap | undefined): string {
  if (!map || map.kind === 'identity') return 'the dose is the control parameter';
  if (map.kind === 'table') {
    const rows = map.dose.map((d, i) => `${figure(d)} → ${mapNumberText(map.value[i] ?? 0)}`);
    return `calibration table: ${rows.join('; ')}`;
  }
  const { kind, ...numbers } = map;
  const named = Object.entries(numbers).map(
    ([key, n]) => `${key} ${mapNumberText(n as MapNumber)}`,
  );
  const name = {
    linear: 'linear',
    'hill-inhibition': 'Hill, inhibiting',
    'hill-activation': 'Hill, activating',
  };
  return `${name[kind]}: ${named.join(', ')}`;
}

type Parameter = SystemModel['parameters'][number];
type Variable = SystemModel['variables'][number];

const parameterColumns = (control: Control): Column<Parameter>[] => [
  { key: 'symbol', head: 'Parameter', strong: true, cell: (p) => p.symbol },
  {
    key: 'value',
    head: 'Value',
    kind: 'figure',
    cell: (p) =>
      p.symbol === control.symbol
        ? `${figure(control.from)} to ${figure(control.to)}`
        : figure(p.value, 6),
  },
  { key: 'unit', head: 'Unit', cell: (p) => unitText(p.unit) },
  {
    key: 'spread',
    head: 'How sure',
    cell: (p) => (p.symbol === control.symbol ? 'control parameter' : spreadText(p.spread)),
  },
  { key: 'label', head: 'In words', cell: (p) => p.label ?? '' },
];

const variableColumns: Column<Variable>[] = [
  { key: 'symbol', head: 'Variable', strong: true, cell: (v) => v.symbol },
  { key: 'start', head: 'Start', kind: 'figure', cell: (v) => figure(v.start, 6) },
  { key: 'unit', head: 'Unit', cell: (v) => unitText(v.unit) },
  { key: 'sign', head: 'Range', cell: (v) => (v.nonnegative ? 'never negative' : 'any') },
  { key: 'label', head: 'In words', cell: (v) => v.label ?? '' },
];

/** A system to look at: for those who may not write, and for older versions. */
export function SystemView({ model, control }: { model: SystemModel; control: Control }) {
  const unit = model.parameters.find((p) => p.symbol === control.symbol)?.unit;
  return (
    <div className="flex flex-col gap-6">
      <Plate title={model.name}>
        <Equations model={model} />
        <p className="mt-3 text-ink2">
          Time in {model.timeUnit}. Control parameter {control.symbol}, from {figure(control.from)}{' '}
          to {withUnit(figure(control.to), unit)}; {doseMapText(control.doseMap)}.
        </p>
      </Plate>
      <DataTable
        caption="Variables"
        columns={variableColumns}
        rows={model.variables}
        rowKey={(v) => v.symbol}
      />
      <DataTable
        caption="Parameters"
        columns={parameterColumns(control)}
        rows={model.parameters}
        rowKey={(p) => p.symbol}
      />
      <Readouts model={model} />
    </div>
  );
}

function Readouts({ model }: { model: SystemModel }) {
  if (!model.readouts?.length) return null;
  return (
    <Plate title="Readouts">
      <ul className="flex flex-col gap-1">
        {model.readouts.map((r) => (
          <li key={r.symbol}>
            <span className="font-mono">
              {r.symbol} = {r.expression}
            </span>
            <span className="text-ink2">
              {r.unit ? `, in ${unitText(r.unit)}` : ''}
              {r.noiseSd ? `, noise sd ${withUnit(figure(r.noiseSd), r.unit)}` : ''}
            </span>
          </li>
        ))}
      </ul>
    </Plate>
  );
}
