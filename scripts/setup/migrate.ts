import { drizzle } from 'drizzle-orm/mysql2';
import { migrate } from 'drizzle-orm/mysql2/migrator';
import mysql, { type RowDataPacket } from 'mysql2/promise';
import type { DatabaseConfig } from '@/db/client';

const lockSeconds = 120;
/** Where Drizzle writes down the migrations that are complete. */
const recordTable = '__drizzle_migrations';

/**
 * Brings a database to the newest migration. Two starting servers take turns: MariaDB does not roll
 * back changes of tables, so a migration must never run twice at once.
 *
 * @param config the database; its user may change tables
 * @param migrationsFolder path of the generated migrations
 * @throws when the turn does not come within two minutes, or a statement fails
 */
export async function migrateDatabase(
  config: DatabaseConfig,
  migrationsFolder: string,
): Promise<void> {
  const connection = await mysql.createConnection({
    host: config.host,
    port: config.port,
    user: config.user,
    password: config.password,
    database: config.database,
    timezone: 'Z',
    charset: 'utf8mb4',
  });
  const lockName = `${config.database}.migrate`;
  try {
    const [rows] = await connection.query<RowDataPacket[]>('SELECT GET_LOCK(?, ?) AS taken', [
      lockName,
      lockSeconds,
    ]);
    if (Number(rows[0]?.taken) !== 1) {
      throw new Error(`Another process is still migrating ${config.database}.`);
    }
    await clearUnfinished(connection, config.database);
    await migrate(drizzle(connection), { migrationsFolder });
  } finally {
    // Closing the connection gives the lock back, whatever happened on it.
    await connection.end();
  }
}

/**
 * Empties a database whose very first migration was cut short, so that it can run again. Nothing is
 * lost: no server is started before the first migration is complete and on record.
 */
async function clearUnfinished(connection: mysql.Connection, database: string): Promise<void> {
  const [tables] = await connection.query<RowDataPacket[]>(
    'SELECT table_name AS name FROM information_schema.tables WHERE table_schema = DATABASE()',
  );
  if (tables.length === 0) return;
  if (tables.some((table) => table.name === recordTable)) {
    const [done] = await connection.query<RowDataPacket[]>(`SELECT id FROM ${recordTable} LIMIT 1`);
    if (done.length > 0) return;
  }
  const name = connection.escapeId(database);
  await connection.query(`DROP DATABASE ${name}`);
  await connection.query(
    `CREATE DATABASE ${name} CHARACTER SET utf8mb4 COLLATE utf8mb4_unicode_ci`,
  );
  await connection.query(`USE ${name}`);
}
