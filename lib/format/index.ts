export * from './durations';
export * from './intervals';
export * from './numbers';
export * from './times';
export * from './units';
