import { customType, timestamp, uuid } from 'drizzle-orm/pg-core';

/** Raw bytes; the driver gives and takes Uint8Array. */
export const bytes = customType<{ data: Uint8Array; driverData: Uint8Array }>({ dataType: () => 'bytea' });

/** A half-open interval of instants, as PostgreSQL writes it: '[from,to)'. */
export const instantRange = customType<{ data: string; driverData: string }>({ dataType: () => 'tstzrange' });

/** UUIDv7, made by the application. */
export const id = () => uuid('id').primaryKey();

/** An instant in UTC. */
export const instant = (name: string) => timestamp(name, { withTimezone: true, mode: 'date' });

/** A wall-clock time without zone, 'YYYY-MM-DD HH:MM:SS': what is due is ruled in the course's zone, not here. */
export const wallClock = (name: string) => timestamp(name, { withTimezone: false, mode: 'string' });

export const createdAt = () => instant('created_at').notNull().defaultNow();
