export { OnsetRibbon } from './onset-ribbon';
export { RibbonDrawing, type RibbonDrawingProps } from './ribbon-drawing';
export { ribbonSentence } from './sentence';
export type {
  Envelope,
  LevelState,
  ObservedOnset,
  PredictedOnset,
  RibbonData,
  RibbonLevel,
  RibbonSize,
} from './types';
