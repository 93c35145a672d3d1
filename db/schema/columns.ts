import { sql } from 'drizzle-orm';
import { char, datetime, json } from 'drizzle-orm/mysql-core';

/** UUIDv7 made where the thing is made. */
export const id = (name = 'id') => char(name, { length: 36 });
export const primaryId = () => id().primaryKey();
/** An instant in UTC, to the millisecond. */
export const instant = (name: string) => datetime(name, { mode: 'date', fsp: 3 });
export const createdAt = () => instant('created_at').notNull().default(sql`CURRENT_TIMESTAMP(3)`);
/** JSON of a known shape; parsed by its zod schema wherever it comes from outside. */
export const shape = <T>(name: string) => json(name).$type<T>();
