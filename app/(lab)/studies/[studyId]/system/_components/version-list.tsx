import Link from 'next/link';

type Version = { number: number; reason: string; by: string; at: string };

/** Every version that was ever saved, the newest first; none of them changes. */
export function VersionList(props: { studyId: string; shown: number; versions: Version[] }) {
  const { studyId, shown, versions } = props;
  return (
    <ol className="flex flex-col divide-y divide-rule">
      {versions.map((v) => (
        <li key={v.number} className="py-3 first:pt-0 last:pb-0">
          <Link
            href={`/studies/${studyId}/system?version=${v.number}`}
            aria-current={v.number === shown ? 'page' : undefined}
            className="font-semibold underline-offset-4 hover:underline aria-[current=page]:text-index"
          >
            System v{v.number}
          </Link>
          <p>{v.reason}</p>
          <p className="text-caption text-ink2">
            {v.by}, {v.at}
          </p>
        </li>
      ))}
    </ol>
  );
}
