'use client';

import clsx from 'clsx';
import Link from 'next/link';
import { usePathname } from 'next/navigation';

export function LabParts({ parts }: { parts: { href: string; name: string }[] }) {
  const path = usePathname();
  return (
    <nav aria-label="Parts of the lab" className="mt-4 flex flex-wrap gap-6 border-b border-rule">
      {parts.map((p) => (
        <Link
          key={p.href}
          href={p.href}
          aria-current={path === p.href ? 'page' : undefined}
          className={clsx(
            'flex min-h-10 items-center border-b-2 pointer-coarse:min-h-12',
            path === p.href ? 'border-index font-bold' : 'border-transparent text-ink2',
          )}
        >
          {p.name}
        </Link>
      ))}
    </nav>
  );
}
