export { Caution } from './caution';
export { type Column, DataTable, IntervalFigure } from './data-table';
export { Finding, FindingAndTable } from './finding';
export { Logo, OpenSwitch } from './glyphs';
export { Key, type KeyKind, KeyLink, keyClass } from './key';
export { LoadingRibbon } from './loading-ribbon';
export { Plate } from './plate';
export { EmptyState, FailedState, ForbiddenState } from './states';
