'use client';

import clsx from 'clsx';
import Link from 'next/link';
import { usePathname } from 'next/navigation';
import { Logo } from '@/components/ui/glyphs';

const PLACES = [
  { href: '/today', name: 'Today' },
  { href: '/studies', name: 'Studies' },
  { href: '/calendar', name: 'Calendar' },
  { href: '/models', name: 'Models' },
  { href: '/lab', name: 'Lab' },
] as const;

export type PlacesProps = {
  /** how many things wait for this person */
  waiting: number;
  waitingHref?: string;
  name: string;
  role: string;
  accountHref?: string;
  /** server action of the sign-out key; without it the key is a link to `signOutHref` */
  signOut?: () => void | Promise<void>;
  signOutHref?: string;
};

/**
 * Places as words on a line, the index triangle under the current one. On a tablet they are five
 * keys of 64 px at the bottom edge, under the thumbs; the page leaves that height free.
 */
export function Places(props: PlacesProps) {
  const path = usePathname() ?? '';
  return (
    <header className="h-14 border-b border-rule print:hidden">
      <div className="mx-auto flex h-full max-w-[1904px] items-center px-4 tablet:px-8">
        <Link href="/today" className="flex items-center gap-2.5 text-[18px] leading-6 font-bold">
          <Logo />
          Swaypoint
        </Link>
        <nav
          aria-label="Places"
          className="fixed inset-x-0 bottom-0 z-20 grid h-16 grid-cols-5 border-t border-rule bg-plate desk:static desk:ml-12 desk:flex desk:h-full desk:gap-9 desk:border-0 desk:bg-transparent"
        >
          {PLACES.map((place) => (
            <Place key={place.href} {...place} current={isAt(path, place.href)} />
          ))}
        </nav>
        <Person {...props} />
      </div>
    </header>
  );
}

/** A session belongs to Today: that is where it is opened from. */
function isAt(path: string, href: string): boolean {
  if (href === '/today' && path.startsWith('/sessions')) return true;
  return path === href || path.startsWith(`${href}/`);
}

function Place({ href, name, current }: { href: string; name: string; current: boolean }) {
  return (
    <Link
      href={href}
      aria-current={current ? 'page' : undefined}
      className={clsx(
        'press relative flex items-center justify-center text-body hover:text-ink',
        current ? 'font-semibold text-ink' : 'text-ink2',
      )}
    >
      {name}
      {current ? (
        <svg
          width={14}
          height={8}
          viewBox="0 0 14 8"
          aria-hidden="true"
          className="absolute top-0 left-1/2 -ml-[7px] rotate-180 desk:top-auto desk:bottom-0 desk:rotate-0"
        >
          <path d="M0 8L7 0L14 8Z" fill="var(--index)" />
        </svg>
      ) : null}
    </Link>
  );
}

function Person(props: PlacesProps) {
  const { waiting, waitingHref = '/today', name, role, accountHref = '/account' } = props;
  const quiet = 'min-h-6 underline-offset-4 hover:underline';
  return (
    <div className="ml-auto flex min-w-0 items-center gap-4 text-body whitespace-nowrap tablet:gap-9">
      <Link href={waitingHref} className={clsx('text-ink2', quiet)}>
        Waiting <b className="font-bold text-ink">{waiting}</b>
      </Link>
      <Link href={accountHref} className={clsx('hidden tablet:inline', quiet)}>
        {name}, <span className="text-ink2">{role}</span>
      </Link>
      {props.signOut ? (
        <form action={props.signOut} className="contents">
          <button type="submit" className={clsx('text-ink2', quiet)}>
            Sign out
          </button>
        </form>
      ) : props.signOutHref ? (
        <a href={props.signOutHref} className={clsx('text-ink2', quiet)}>
          Sign out
        </a>
      ) : null}
    </div>
  );
}
