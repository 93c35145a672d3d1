import { OnsetRibbon, type RibbonData } from '@/components/ribbon';
import { JoinedChart, type JoinedChartProps } from './joined-chart';

type JoinedPlateProps = RibbonData & {
  label: string;
  /** the chart beneath; without it the ribbon stands alone */
  chart?: Pick<JoinedChartProps, 'amplitudeUnit' | 'predicted' | 'observations' | 'height'>;
  /** px inside the plate before it has been measured */
  width?: number;
};

/** Ribbon with its chart joined beneath on the same scale; at a phone's width the card ribbon. */
export function JoinedPlate({ chart, width, ...data }: JoinedPlateProps) {
  return (
    <div className="rounded-key border border-rule bg-plate">
      <div className="hidden pt-2 pb-1.5 tablet:block">
        <OnsetRibbon {...data} size="page" width={width} />
      </div>
      <div className="px-2.5 pt-2 pb-1.5 tablet:hidden">
        <OnsetRibbon {...data} size="card" />
      </div>
      {chart ? (
        <div className="border-t border-rule">
          <JoinedChart
            {...chart}
            from={data.from}
            to={data.to}
            unit={data.unit}
            label={data.label}
            onsets={data.onsets.map((o) => o.value)}
            observed={data.observed}
            width={width}
          />
        </div>
      ) : null}
    </div>
  );
}
