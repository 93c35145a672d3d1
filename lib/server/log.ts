import pino from 'pino';

/** Structured lines on standard output; nothing personal goes in. */
export const log = pino({ base: null });
