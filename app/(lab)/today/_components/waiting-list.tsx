import Link from 'next/link';
import type { Waiting } from '@/db/queries/waiting';
import { stampText } from '@/lib/format';

/** What waits for this person, the longest waiting first. */
export function WaitingList({ waiting, zone }: { waiting: Waiting[]; zone: string }) {
  return (
    <section id="waiting" className="min-w-0">
      <h2 className="mb-2 text-section font-semibold">Waits for you</h2>
      {waiting.length === 0 ? (
        <p className="text-ink2">Nothing.</p>
      ) : (
        <ul className="rounded-key border border-rule bg-plate">
          {waiting.map((w) => (
            <li key={`${w.kind} ${w.id}`} className="border-b border-rule last:border-b-0">
              <Link href={w.href} className="block px-4 py-3 hover:bg-well">
                <span className="block font-semibold">{w.text}</span>
                <span className="block text-caption text-ink2">
                  {w.study}, since {stampText(w.since, zone)}
                </span>
              </Link>
            </li>
          ))}
        </ul>
      )}
    </section>
  );
}
