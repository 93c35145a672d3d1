import type { RibbonSize } from './types';

export type Dimensions = {
  width: number;
  height: number;
  pad: number;
  centre: number;
  amplitude: number;
  zone: [number, number];
  /** centre of marks: rising, falling, neither */
  lanes: { up: number; down: number; none: number };
  rule: number;
  mark: number;
  wavelength: number;
  line: number;
  /** step of the wave's path */
  step: number;
  ticks: { minor: number; major: number };
  notch: { width: number; height: number };
  /** baseline of the upper text, or null */
  upperText: number | null;
  lowerText: number | null;
  font: { label: number; numeral: number };
  ceilingLine: number;
};

export const DIMENSIONS: Record<RibbonSize, Dimensions> = {
  list: {
    width: 160,
    height: 24,
    pad: 3,
    centre: 7.5,
    amplitude: 6,
    zone: [1, 14],
    lanes: { up: 18.5, down: 18.5, none: 18.5 },
    rule: 18,
    mark: 6,
    wavelength: 7,
    line: 1.2,
    step: 0.5,
    ticks: { minor: 0, major: 0 },
    notch: { width: 1, height: 6 },
    upperText: null,
    lowerText: null,
    font: { label: 0, numeral: 0 },
    ceilingLine: 1.5,
  },
  card: {
    width: 480,
    height: 56,
    pad: 6,
    centre: 15,
    amplitude: 12,
    zone: [2, 28],
    lanes: { up: 33.5, down: 33.5, none: 33.5 },
    rule: 40,
    mark: 9,
    wavelength: 13,
    line: 1.5,
    step: 1,
    ticks: { minor: 2, major: 4 },
    notch: { width: 2, height: 9 },
    upperText: null,
    lowerText: 55,
    font: { label: 11, numeral: 11 },
    ceilingLine: 2,
  },
  page: {
    width: 1374,
    height: 120,
    pad: 16,
    centre: 45,
    amplitude: 23,
    zone: [20, 69],
    lanes: { up: 77.5, down: 90.5, none: 84 },
    rule: 100,
    mark: 12,
    wavelength: 20,
    line: 2,
    step: 1,
    ticks: { minor: 4, major: 7 },
    notch: { width: 2, height: 14 },
    upperText: 16,
    lowerText: 119,
    font: { label: 12, numeral: 11 },
    ceilingLine: 2,
  },
};

/** Advance of one figure of the monospaced face, in em (measured from the font file). */
export const MONO_ADVANCE = 0.63;
export const monoWidth = (text: string, size: number): number => text.length * size * MONO_ADVANCE;
