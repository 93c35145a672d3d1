'use client';

import Link from 'next/link';
import { useSelectedLayoutSegment } from 'next/navigation';
import { StudyHead } from '@/components/frame';

type FrameStation = {
  key: string;
  name: string;
  state: 'done' | 'part' | 'later';
  fact: string;
  missing: string | null;
};

/**
 * Title and signal line. The line stands open before the first station that waits for something; the
 * layout does not know which page is open, so the current station is found here.
 */
export function StudyFrame(props: {
  studyId: string;
  title: string;
  subtitle: string;
  stations: FrameStation[];
}) {
  const { studyId, title, subtitle, stations } = props;
  const segment = useSelectedLayoutSegment();
  const opensAfter = stations.findIndex((s) => s.missing !== null);
  const home = `/studies/${studyId}`;
  return (
    <StudyHead
      title={
        segment === null ? (
          title
        ) : (
          <Link href={home} className="underline-offset-4 hover:underline">
            {title}
          </Link>
        )
      }
      subtitle={subtitle || undefined}
      stations={stations.map((s, i) => ({
        name: s.name,
        href: `${home}/${s.key}`,
        state: s.key === segment ? 'current' : s.state === 'part' ? 'partly' : s.state,
        fact: s.fact,
        missing: opensAfter >= 0 && i === opensAfter + 1,
      }))}
    />
  );
}
