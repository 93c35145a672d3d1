'use client';

import { type RefObject, useEffect, useRef, useState } from 'react';

/**
 * Width of an element in whole px, followed as it changes; `initial` until it has been measured.
 */
export function useWidth<T extends HTMLElement>(initial: number): [RefObject<T | null>, number] {
  const ref = useRef<T>(null);
  const [width, setWidth] = useState(initial);
  useEffect(() => {
    const element = ref.current;
    if (!element) return;
    const measure = () => {
      const found = Math.round(element.getBoundingClientRect().width);
      if (found > 0) setWidth(found);
    };
    measure();
    const observer = new ResizeObserver(measure);
    observer.observe(element);
    return () => observer.disconnect();
  }, []);
  return [ref, width];
}
