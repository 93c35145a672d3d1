import { type Column, DataTable, IntervalFigure } from '@/components/ui';
import type { ObservedOnset } from '@/lib/contracts';
import { unitText } from '@/lib/format';

type Method = ObservedOnset['methods'][number];

/** Each way to the onset: its interval, whether it was used, and why. */
function Methods({ onset, unit, name }: { onset: ObservedOnset; unit: string; name: string }) {
  const columns: Column<Method>[] = [
    { key: 'name', head: 'Method', strong: true, cell: (m) => m.name },
    {
      key: 'onset',
      head: 'Onset',
      unit: unitText(unit) || undefined,
      kind: 'figure',
      cell: (m) => <IntervalFigure interval={m.onset} />,
    },
    { key: 'used', head: 'Used', cell: (m) => (m.used ? 'yes' : 'no') },
    { key: 'why', head: 'Why', cell: (m) => <span className="block min-w-64 py-2">{m.why}</span> },
  ];
  return (
    <DataTable
      caption={`Methods for ${name}`}
      columns={columns}
      rows={onset.methods}
      rowKey={(m) => m.name}
    />
  );
}

/** The onset of each preparation by itself; replicates are what the interval of the whole rests on. */
function Preparations(props: { onset: ObservedOnset; unit: string; name: string }) {
  const { onset, unit, name } = props;
  if (onset.byPreparation.length === 0) return null;
  return (
    <DataTable
      caption={`By preparation, ${name}`}
      columns={[
        { key: 'preparation', head: 'Preparation', strong: true, cell: (p) => p.preparation },
        {
          key: 'onset',
          head: 'Onset',
          unit: unitText(unit) || undefined,
          kind: 'figure',
          cell: (p) => <IntervalFigure interval={p.onset} />,
        },
      ]}
      rows={onset.byPreparation}
      rowKey={(p) => p.preparation}
    />
  );
}

function Hysteresis({ onset, unit }: { onset: ObservedOnset; unit: string }) {
  if (!onset.hysteresis) return null;
  const { up, down } = onset.hysteresis;
  return (
    <DataTable
      caption="Way up and way down"
      columns={[
        { key: 'arm', head: 'Arm', strong: true, cell: (r) => r.arm },
        {
          key: 'onset',
          head: 'Onset',
          unit: unitText(unit) || undefined,
          kind: 'figure',
          cell: (r) => <IntervalFigure interval={r.onset} />,
        },
      ]}
      rows={[
        { arm: 'up', onset: up },
        { arm: 'down', onset: down },
      ]}
      rowKey={(r) => r.arm}
    />
  );
}

/** How each observed onset was worked out. */
export function MethodTables({ onsets, unit }: { onsets: ObservedOnset[]; unit: string }) {
  return (
    <section id="methods" className="mt-8 flex flex-col gap-6">
      <div>
        <h2 className="mb-1 text-section font-semibold">Methods</h2>
        <p className="max-w-[640px] text-ink2">
          The onset rests on the evidence alone, for the population of independent preparations. The
          prediction enters the comparison and the next levels only. Intervals are 90 %.
        </p>
      </div>
      {onsets.map((onset, i) => {
        const which =
          onsets.length > 1 ? (i === 0 ? 'the lower onset' : 'the upper onset') : 'the onset';
        return (
          <div key={which} className="flex flex-col gap-3">
            {onsets.length > 1 ? (
              <h3 className="font-semibold">{which.replace('the', 'The')}</h3>
            ) : null}
            <Methods onset={onset} unit={unit} name={which} />
            <div className="grid gap-3 tablet:grid-cols-2">
              <Preparations onset={onset} unit={unit} name={which} />
              <Hysteresis onset={onset} unit={unit} />
            </div>
          </div>
        );
      })}
    </section>
  );
}
