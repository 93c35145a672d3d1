export { MarkShape } from './mark-shape';
export { MARK_COLOUR, MARK_STATES, type MarkState } from './states';
export { TexturePattern, TextureStrip } from './texture';
export { VerdictLabel, VerdictMark } from './verdict-mark';
