import { drizzle } from 'drizzle-orm/mysql2';
import mysql from 'mysql2/promise';
import * as schema from './schema';

export type DatabaseConfig = {
  host: string;
  port: number;
  user: string;
  password: string;
  database: string;
  connections?: number;
};

/** Opens a pool. Instants cross as UTC; the caller closes the pool. */
export function openDatabase(config: DatabaseConfig) {
  const pool = mysql.createPool({
    host: config.host,
    port: config.port,
    user: config.user,
    password: config.password,
    database: config.database,
    connectionLimit: config.connections ?? 10,
    timezone: 'Z',
    charset: 'utf8mb4',
    enableKeepAlive: true,
    connectTimeout: 5000,
  });
  const db = drizzle(pool, { schema, mode: 'default' });
  return { db, pool, close: () => pool.end() };
}

export type Db = ReturnType<typeof openDatabase>['db'];
export type Transaction = Parameters<Parameters<Db['transaction']>[0]>[0];
/** Queries take the database or a transaction first, then one object with the lab's id in it. */
export type Conn = Db | Transaction;
