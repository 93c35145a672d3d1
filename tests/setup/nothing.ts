// Stands in for `server-only`, which refuses to load outside of a React server.
export {};
