import type { ReactNode } from 'react';
import { SkipLink } from '@/components/frame';

/** The bench card brings its own rule and leaves no other way off the page than back. */
export default function BenchLayout({ children }: { children: ReactNode }) {
  return (
    <>
      <SkipLink />
      {children}
    </>
  );
}
