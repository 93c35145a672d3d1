export { ActKey, StopKey } from './act-keys';
export { BenchCard, type BenchCardProps } from './bench-card';
export { BenchHead, type BenchHeadProps } from './bench-head';
export { Countdown, type CountdownProps } from './countdown';
export { ExceptionKeys, type ExceptionKeysProps } from './exception-keys';
export { SessionRule, type SessionRuleProps } from './session-rule';
export { TimeTrack } from './time-track';
export { ValueField, type ValueFieldProps } from './value-field';
