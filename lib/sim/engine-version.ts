/** Rises whenever an answer could change. */
export const engineVersion = '1';
