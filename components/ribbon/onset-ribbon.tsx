'use client';

import { useWidth } from '@/components/ui/use-width';
import { DIMENSIONS } from './dimensions';
import { RibbonDrawing, type RibbonDrawingProps } from './ribbon-drawing';

/**
 * The onset ribbon in three sizes. The list size is always 160×24; card and page take the width of
 * their container, and `width` is what they start with before it is known.
 */
export function OnsetRibbon(props: RibbonDrawingProps) {
  return props.size === 'list' ? <RibbonDrawing {...props} /> : <FittedRibbon {...props} />;
}

function FittedRibbon({ width, ...props }: RibbonDrawingProps) {
  const dim = DIMENSIONS[props.size];
  const [ref, measured] = useWidth<HTMLDivElement>(width ?? dim.width);
  return (
    <div ref={ref} className="w-full min-w-0 overflow-x-clip" style={{ height: dim.height }}>
      <RibbonDrawing {...props} width={measured} />
    </div>
  );
}
