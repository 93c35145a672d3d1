import { useId } from 'react';
import { BandAndComb, Envelopes, Hatch, Wave } from './band-parts';
import { DIMENSIONS } from './dimensions';
import { ribbonTexts } from './labels';
import { scaleX, ticksOf } from './scale';
import { Ceiling, Here, Levels, Observed, Predicted, ScaleRule, Texts } from './scale-parts';
import { ribbonSentence } from './sentence';
import type { RibbonData, RibbonSize } from './types';
import { wavePath } from './wave';

export type RibbonDrawingProps = RibbonData & {
  size: RibbonSize;
  /** px; the size's own when absent */
  width?: number;
  /** figures at the pointers; a card that shows the level at the bench leaves them out */
  labels?: boolean;
  /** colour behind the marks */
  ground?: string;
};

/** The onset ribbon as one SVG of a known width, drawn from the envelope up to the levels. */
export function RibbonDrawing({
  size,
  width,
  labels,
  ground = 'var(--plate)',
  ...data
}: RibbonDrawingProps) {
  const id = useId().replace(/[^A-Za-z0-9_-]/g, '');
  const dim = DIMENSIONS[size];
  const w = Math.max(width ?? dim.width, 4 * dim.pad);
  const x = scaleX(data.from, data.to, w, dim.pad);
  const wave = wavePath(data, dim, w);
  const withLabels = labels ?? !(size === 'card' && data.here !== undefined);
  const common = { data, size, dim, x, width: w, id };
  return (
    <svg
      width={w}
      height={dim.height}
      viewBox={`0 0 ${w} ${dim.height}`}
      role="img"
      aria-label={ribbonSentence(data)}
      className="block max-w-full overflow-visible font-mono"
    >
      <Hatch id={`${id}-hatch`} />
      {size === 'list' ? null : <Envelopes paths={wave.envelopes} />}
      <BandAndComb {...common} />
      <Wave {...common} wave={wave} />
      <ScaleRule
        {...common}
        ticks={size === 'list' ? [] : ticksOf(data.from, data.to, w, dim.pad)}
      />
      <Ceiling {...common} />
      <Predicted {...common} ground={ground} />
      <Observed {...common} />
      <Levels {...common} ground={ground} />
      <Here {...common} />
      <Texts texts={ribbonTexts(data, x, dim, w, size, withLabels)} dim={dim} ground={ground} />
    </svg>
  );
}
