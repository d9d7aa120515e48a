import { bigint, integer, pgTable, varchar } from 'drizzle-orm/pg-core';

/** Counters of attempts, in the form that rate-limiter-flexible reads; keys are hashes. */
export const rateLimit = pgTable('rate_limit', {
	key: varchar('key', { length: 255 }).primaryKey(),
	points: integer('points').notNull().default(0),
	expire: bigint('expire', { mode: 'number' })
});
