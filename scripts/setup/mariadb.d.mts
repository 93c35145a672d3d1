import type { ChildProcess } from 'node:child_process';

export type MariadbPlaces = {
  folder: string;
  data: string;
  options: string;
  log: string;
  socketFolder: string;
  socket: string;
};

export type RunningMariadb = {
  host: '127.0.0.1';
  port: number;
  child: ChildProcess;
  places: MariadbPlaces;
};

export function startMariadb(
  folder: string,
  settings: {
    password: string;
    port?: number;
    databases: string[];
    user: string;
    durable?: boolean;
  },
): Promise<RunningMariadb>;

export function stopMariadb(server: RunningMariadb): Promise<'ended' | 'killed'>;
