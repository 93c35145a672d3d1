import Link from 'next/link';
import { OnsetRibbon } from '@/components/ribbon';
import { Equations } from '@/components/system/equations';
import { KeyLink, Plate } from '@/components/ui';
import { figure, unitText, withUnit } from '@/lib/format';
import { citationOf } from '@/lib/server/systems/published-source';
import type { LibraryModel } from '@/lib/sim/library';
import type { PredictedHere } from './predicted-here';

type PlateProps = { model: LibraryModel; predicted: PredictedHere | null; startable: boolean };

/** One published system: what it is, its equations, what is turned, where it comes from. */
export function ModelPlate({ model: published, predicted, startable }: PlateProps) {
  const { id, title, summary, source, provenance, perturbs, model, control } = published;
  const parameter = model.parameters.find((p) => p.symbol === control.symbol);
  const range = `${figure(control.from)} to ${withUnit(figure(control.to), parameter?.unit)}`;
  return (
    <Plate title={title} id={id} className="flex flex-col">
      <p>{summary}</p>
      <div className="mt-4">
        <Equations model={model} />
      </div>
      <dl className="mt-4 grid gap-x-4 gap-y-1 tablet:grid-cols-[10rem_minmax(0,1fr)]">
        <dt className="text-caption text-ink2 tablet:pt-[3px]">Control parameter</dt>
        <dd>
          {parameter?.label ? `${parameter.label} (${control.symbol})` : control.symbol}, {range}
        </dd>
        <dt className="text-caption text-ink2 tablet:pt-[3px]">Dose</dt>
        <dd>{`${published.doseLabel}, in ${unitText(published.doseUnit)}`}</dd>
        <dt className="text-caption text-ink2 tablet:pt-[3px]">Perturbs</dt>
        <dd>{perturbs}</dd>
        <dt className="text-caption text-ink2 tablet:pt-[3px]">Source</dt>
        <dd>
          {citationOf(source)}
          <span className="mt-1 block text-caption text-ink2">{provenance}</span>
        </dd>
      </dl>
      {predicted ? (
        <div className="mt-4 border-t border-rule pt-3">
          <OnsetRibbon size="card" {...predicted.ribbon} />
          <p className="mt-2 text-caption text-ink2">
            As predicted in{' '}
            <Link href={`/studies/${predicted.studyId}/prediction`} className="underline">
              {predicted.title}
            </Link>
            .
          </p>
        </div>
      ) : null}
      {startable ? (
        <div className="mt-auto pt-4">
          <KeyLink href={`/studies/new?model=${id}`}>Start a study from this</KeyLink>
        </div>
      ) : null}
    </Plate>
  );
}
