export * from './evidence';
export * from './lab';
export * from './run';
export * from './series';
export * from './study';
export * from './work';
