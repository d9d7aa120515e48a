import { RateLimiterPostgres, RateLimiterRes } from 'rate-limiter-flexible';
import { getSidePool } from '../db/client';
import { Refusal } from '../failures';
import { hashToken } from './tokens';

/** Attempts allowed within so many seconds; kept in PostgreSQL, so all processes count together. */
const rules = {
	/** Failed sign-ins and second steps for one account. */
	signInAccount: { points: 8, seconds: 15 * 60 },
	/** Failed sign-ins from one address; many people may share it. */
	signInAddress: { points: 60, seconds: 15 * 60 },
	/** Letters that a stranger can cause to one mailbox. */
	letterAccount: { points: 5, seconds: 60 * 60 },
	/** Letters that a stranger can cause from one address. */
	letterAddress: { points: 40, seconds: 60 * 60 },
	/** Holds of places from one address: nobody keeps a season's places by holding them. */
	reserveAddress: { points: 40, seconds: 15 * 60 }
} as const;

export type LimitRule = keyof typeof rules;

const limiters = new Map<LimitRule, RateLimiterPostgres>();

function limiter(rule: LimitRule): RateLimiterPostgres {
	let found = limiters.get(rule);
	if (!found) {
		found = new RateLimiterPostgres({
			storeClient: getSidePool(),
			storeType: 'pool',
			tableName: 'rate_limit',
			tableCreated: true,
			keyPrefix: rule,
			points: rules[rule].points,
			duration: rules[rule].seconds,
			clearExpiredByTimeout: false
		});
		limiters.set(rule, found);
	}
	return found;
}

function tooMany(waitMs: number): Refusal {
	const minutes = Math.max(1, Math.ceil(waitMs / 60_000));
	return new Refusal(
		'too_many',
		`Too many attempts. Try again in ${minutes} ${minutes === 1 ? 'minute' : 'minutes'}.`
	);
}

/**
 * Counts one attempt; before it is looked at, so that many at once are no more than many in a row.
 * @throws Refusal when the limit is used up
 */
export async function countAttempt(rule: LimitRule, key: string): Promise<void> {
	try {
		await limiter(rule).consume(hashToken(key));
	} catch (answer) {
		if (answer instanceof RateLimiterRes) throw tooMany(answer.msBeforeNext);
		throw answer;
	}
}

/** Takes back one attempt that was counted and turned out to be rightful. */
export async function giveBackAttempt(rule: LimitRule, key: string): Promise<void> {
	await limiter(rule).reward(hashToken(key));
}

/** Forgets the attempts, after one that succeeded. */
export async function forgetAttempts(rule: LimitRule, key: string): Promise<void> {
	await limiter(rule).delete(hashToken(key));
}
