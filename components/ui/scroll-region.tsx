'use client';

import { type ReactNode, useEffect, useRef } from 'react';

/** A named region that takes keyboard focus only while its content is wider than it is. */
export function ScrollRegion(props: { label: string; className?: string; children: ReactNode }) {
  const ref = useRef<HTMLElement>(null);
  useEffect(() => {
    const region = ref.current;
    if (!region) return;
    const settle = () => {
      if (region.scrollWidth > region.clientWidth) region.tabIndex = 0;
      else region.removeAttribute('tabindex');
    };
    settle();
    const observer = new ResizeObserver(settle);
    observer.observe(region);
    return () => observer.disconnect();
  }, []);
  return (
    <section
      ref={ref}
      aria-label={props.label}
      className={`overflow-x-auto print:overflow-visible ${props.className ?? ''}`}
    >
      {props.children}
    </section>
  );
}
