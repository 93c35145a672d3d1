import { resolve } from 'node:path';
import mysql, { type RowDataPacket } from 'mysql2/promise';
import { afterAll, beforeEach, expect, test } from 'vitest';
import { env } from '@/lib/server/env';
import { migrateDatabase } from '../../scripts/setup/migrate';

const settings = env();
const migrations = resolve('db/migrations');
const access = {
  host: settings.DATABASE_HOST,
  port: settings.DATABASE_PORT,
  user: settings.DATABASE_USER,
  password: settings.DATABASE_PASSWORD,
};
const database = `${settings.DATABASE_NAME}_migrate`;
const config = { ...access, database };
const connection = await mysql.createConnection(access);
const count = async (query: string) => {
  const [rows] = await connection.query<RowDataPacket[]>(query);
  return Number(rows[0]?.n);
};
const completed = () => count(`SELECT COUNT(*) AS n FROM ${database}.__drizzle_migrations`);

beforeEach(async () => {
  await connection.query(`DROP DATABASE IF EXISTS ${database}`);
  await connection.query(`CREATE DATABASE ${database} CHARACTER SET utf8mb4`);
});
afterAll(async () => {
  await connection.query(`DROP DATABASE IF EXISTS ${database}`);
  await connection.end();
});

test('two servers that start at once migrate once', async () => {
  await Promise.all([migrateDatabase(config, migrations), migrateDatabase(config, migrations)]);
  const once = await completed();
  expect(once).toBeGreaterThan(0);
  await migrateDatabase(config, migrations);
  expect(await completed()).toBe(once);
});

test('a first migration that was cut short runs again from the start', async () => {
  await connection.query(`CREATE TABLE ${database}.lab (half INT)`);
  await migrateDatabase(config, migrations);
  expect(await completed()).toBeGreaterThan(0);
  expect(
    await count(
      `SELECT COUNT(*) AS n FROM information_schema.columns
       WHERE table_schema = '${database}' AND table_name = 'lab' AND column_name = 'half'`,
    ),
  ).toBe(0);
});

test('a migrated database keeps its rows', async () => {
  await migrateDatabase(config, migrations);
  await connection.query(
    `INSERT INTO ${database}.lab (id, name, place, time_zone)
     VALUES ('0190b0a0-0000-7000-8000-000000000001', 'Kept', 'Here', 'UTC')`,
  );
  await migrateDatabase(config, migrations);
  expect(await count(`SELECT COUNT(*) AS n FROM ${database}.lab`)).toBe(1);
});
