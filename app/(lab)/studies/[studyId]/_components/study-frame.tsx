'use client';

import Link from 'next/link';
import { useSelectedLayoutSegment } from 'next/navigation';
import { StudyHead } from '@/components/frame';

type FrameStation = {
  key: string;
  name: string;
  state: 'done' | 'part' | 'later';
  fact: string;
};

/**
 * Title and signal line. The line stands open behind the station that the work waits at; the
 * layout does not know which page is open, so the current station is found here.
 */
export function StudyFrame(props: {
  studyId: string;
  title: string;
  subtitle: string;
  stations: FrameStation[];
  /** index of the station that the work waits at, -1 for none */
  waitingAt: number;
}) {
  const { studyId, title, subtitle, stations, waitingAt } = props;
  const segment = useSelectedLayoutSegment();
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
        missing: waitingAt >= 0 && i === waitingAt + 1,
      }))}
    />
  );
}
