import { KeyLink } from '@/components/ui';
import type { BenchRoomProps } from './types';

/** The session is over, or was taken off the calendar: what it was, and where to go on. */
export function EndPanel(props: BenchRoomProps) {
  const { session, run, studyId, steps } = props;
  const cancelled = session.state === 'cancelled';
  const collects = props.records && steps.some((s) => s.kind === 'collect' && s.done);
  return (
    <div>
      <h2 className="text-instruction font-medium">
        {cancelled ? 'This session was cancelled.' : 'Done. Everything is saved.'}
      </h2>
      {collects ? <p className="mt-4 text-bench">Upload the record while it is at hand.</p> : null}
      <div className="mt-6 flex flex-wrap gap-4">
        {collects ? (
          <KeyLink
            kind="filled"
            className="min-h-20! px-8 text-bench-key!"
            href={`/studies/${studyId}/readings?run=${run.id}&session=${session.id}`}
          >
            Upload the readings
          </KeyLink>
        ) : null}
        <KeyLink
          kind={collects ? 'outlined' : 'filled'}
          className="min-h-20! px-8 text-bench-key!"
          href="/today"
        >
          Back to today
        </KeyLink>
      </div>
      {props.remarks.length > 0 ? (
        <ul className="mt-6 flex list-disc flex-col gap-2 pl-5 text-bench">
          {props.remarks.map((r) => (
            <li key={r.id}>{r.text}</li>
          ))}
        </ul>
      ) : null}
    </div>
  );
}
