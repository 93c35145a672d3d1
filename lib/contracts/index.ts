export * from './common';
export * from './design';
export * from './estimate';
export * from './judge';
export * from './lay-out';
export * from './model';
export * from './predict';
export * from './problem';
