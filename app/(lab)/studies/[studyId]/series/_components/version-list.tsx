import Link from 'next/link';
import { Plate } from '@/components/ui';

type Version = {
  number: number;
  state: string;
  author: string;
  made: string;
  reason: string;
  decider: string | null;
  decision: string | null;
  inherited: boolean;
};

/** Every version that there was, the newest first; nothing is overwritten. */
export function VersionList(props: { studyId: string; shown: number | null; versions: Version[] }) {
  const { studyId, shown, versions } = props;
  if (versions.length < 2) return null;
  return (
    <Plate title="Versions" className="mt-6">
      <ol className="flex flex-col gap-2">
        {versions.map((v) => (
          <li key={v.number} className="flex flex-wrap gap-x-4">
            <Link
              href={`/studies/${studyId}/series?version=${v.number}`}
              aria-current={v.number === shown ? 'page' : undefined}
              className="w-20 font-semibold underline underline-offset-4 aria-[current]:no-underline"
            >
              Version {v.number}
            </Link>
            <span className="w-24">{v.state}</span>
            <span className="text-ink2">
              {v.author}, {v.made}
              {v.reason ? `: ${v.reason}` : ''}
              {v.inherited ? '; inside the approved envelope' : ''}
              {v.decider ? `; decided by ${v.decider}` : ''}
            </span>
          </li>
        ))}
      </ol>
    </Plate>
  );
}
