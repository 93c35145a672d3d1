import { drizzle } from 'drizzle-orm/mysql2';
import { migrate } from 'drizzle-orm/mysql2/migrator';
import mysql, { type RowDataPacket } from 'mysql2/promise';
import type { DatabaseConfig } from '@/db/client';

const lockSeconds = 120;

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
    await migrate(drizzle(connection), { migrationsFolder });
  } finally {
    // Closing the connection gives the lock back, whatever happened on it.
    await connection.end();
  }
}
