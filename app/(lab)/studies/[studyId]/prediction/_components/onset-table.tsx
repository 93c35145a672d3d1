import { type Column, DataTable, IntervalFigure } from '@/components/ui';
import type { PredictedOnset } from '@/lib/contracts';
import { figure, fineDecimalsFor, unitText } from '@/lib/format';
import { criticalityWord, doseBand, headText } from '@/lib/server/predictions/words';

type Units = {
  control: string;
  time: string;
  dose: string;
  doseLabel: string;
  /** more dose gives less of the control parameter */
  falling: boolean;
};

/** A value with its band, or the value alone where there is none. */
function Figures(props: { value: number; band: { low: number; high: number } | null }) {
  const { value, band } = props;
  if (!band || !(band.high > band.low)) return <>{figure(value)}</>;
  const decimals = Math.max(0, fineDecimalsFor((band.high - band.low) / 2));
  return <IntervalFigure interval={{ value, ...band }} style={{ decimals }} />;
}

/** On which side of the onset; said of the dose too where more of it gives less of the control. */
function Side({ oscillates, falling }: { oscillates: 'above' | 'below'; falling: boolean }) {
  if (!falling) return oscillates;
  return (
    <span className="block py-1 leading-5 whitespace-nowrap">
      {oscillates}
      <span className="block text-caption text-ink2">
        at {oscillates === 'above' ? 'lower' : 'higher'} doses
      </span>
    </span>
  );
}

function without({ spread }: PredictedOnset): string {
  if (!spread) return '–';
  return `${Math.round(spread.none * spread.draws)} of ${spread.draws}`;
}

const columns = ({ control, time, dose, doseLabel, falling }: Units): Column<PredictedOnset>[] => [
  {
    key: 'value',
    head: 'Onset',
    unit: unitText(control) || undefined,
    kind: 'figure',
    strong: true,
    cell: (o) => <Figures value={o.value} band={o.spread} />,
  },
  {
    key: 'dose',
    head: headText(doseLabel),
    unit: unitText(dose),
    kind: 'figure',
    cell: (o) =>
      o.dose === null ? (
        <span className="font-sans">unreachable</span>
      ) : (
        <Figures value={o.dose} band={doseBand(o)} />
      ),
  },
  {
    key: 'side',
    head: 'Oscillates',
    cell: (o) => <Side oscillates={o.oscillates} falling={falling} />,
  },
  { key: 'how', head: 'Onset is', cell: (o) => criticalityWord[o.criticality] },
  {
    key: 'period',
    head: 'Period',
    unit: unitText(time),
    kind: 'figure',
    cell: (o) => figure(o.period),
  },
  {
    key: 'slope',
    head: 'Growth slope',
    unit: unitText(control) ? `/${unitText(time)} per ${unitText(control)}` : `/${unitText(time)}`,
    kind: 'figure',
    cell: (o) => figure(o.growthSlope),
  },
  { key: 'none', head: 'Draws without it', kind: 'figure', cell: without },
];

/** Where, how fast, and in bench units. */
export function OnsetTable({ onsets, units }: { onsets: PredictedOnset[]; units: Units }) {
  return (
    <DataTable
      caption="Predicted onsets"
      columns={columns(units)}
      rows={onsets}
      rowKey={(o) => String(o.value)}
    />
  );
}
