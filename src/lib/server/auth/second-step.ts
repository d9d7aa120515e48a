import { randomInt } from 'node:crypto';
import { and, eq, isNull, lt, or } from 'drizzle-orm';
import type { Cookie } from 'lucia';
import { Secret, TOTP } from 'otpauth';
import { addToTrail } from '../audit/trail';
import { recoveryCode, user } from '../db/schema';
import type { PlainTx } from '../db/transaction';
import { Refusal } from '../failures';
import { countAttempt, forgetAttempts } from './limits';
import { seal, unseal } from './seal';
import { openSession } from './sessions';
import { hashToken } from './tokens';

/** Time-based one-time passwords, RFC 6238: SHA-1, 30 s, 6 digits, as the common apps expect. */
const periodSeconds = 30;

function totp(secretBase32: string, email: string): TOTP {
	return new TOTP({
		issuer: 'Bowkeeper',
		label: email,
		secret: Secret.fromBase32(secretBase32),
		period: periodSeconds
	});
}

/** A new shared secret (base32) and the address that an authenticator app reads from a QR code. */
export function newSecondStepSecret(email: string): { secret: string; uri: string } {
	const secret = new Secret({ size: 20 }).base32;
	return { secret, uri: totp(secret, email).toString() };
}

/** The address for a secret made before, so that a form shown again keeps its secret. */
export function secondStepUri(secret: string, email: string): string {
	return totp(secret, email).toString();
}

/** The time step that a code belongs to, one step of clock difference allowed; null when it is wrong. */
function acceptedStep(secret: string, email: string, code: string, nowMs: number): number | null {
	const delta = totp(secret, email).validate({ token: code, window: 1, timestamp: nowMs });
	return delta === null ? null : Math.floor(nowMs / 1000 / periodSeconds) + delta;
}

const base32 = 'ABCDEFGHIJKLMNOPQRSTUVWXYZ234567';

async function writeRecoveryCodes(tx: PlainTx, userId: string): Promise<string[]> {
	const codes = Array.from({ length: 10 }, () =>
		Array.from({ length: 16 }, () => base32[randomInt(32)]).join('')
	);
	await tx.sql.delete(recoveryCode).where(eq(recoveryCode.userId, userId));
	await tx.sql
		.insert(recoveryCode)
		.values(codes.map((code) => ({ userId, codeHash: hashToken(code) })));
	return codes.map((code) => code.replaceAll(/(.{4})(?=.)/g, '$1-'));
}

/**
 * Turns the second step on.
 * @returns ten recovery codes, shown once, and the new session's cookie
 * @throws Refusal when the code does not belong to the secret
 */
export async function startSecondStep(
	tx: PlainTx,
	person: { userId: string; email: string; sessionId: string; userAgent: string },
	given: { secret: string; code: string }
): Promise<{ recoveryCodes: string[]; cookie: Cookie }> {
	const step = acceptedStep(given.secret, person.email, given.code, Date.now());
	if (step === null) {
		throw new Refusal(
			'invalid',
			'These digits do not belong to this key. Check the clock.',
			'code'
		);
	}
	const changed = await tx.sql
		.update(user)
		.set({
			totpSecretSealed: seal(given.secret),
			totpLastStep: step,
			secondStepSince: new Date()
		})
		.where(and(eq(user.id, person.userId), isNull(user.secondStepSince)))
		.returning({ id: user.id });
	if (changed.length === 0) {
		throw new Refusal('conflict', 'The second step is already on.');
	}
	const recoveryCodes = await writeRecoveryCodes(tx, person.userId);
	const cookie = await openSession(tx, {
		userId: person.userId,
		userAgent: person.userAgent,
		secondStepPassed: true,
		replaces: person.sessionId
	});
	await addToTrail(tx, {
		action: 'account.second_step_on',
		subject: { type: 'user', id: person.userId }
	});
	return { recoveryCodes, cookie };
}

/** Turns the second step off; the caller has checked the password. */
export async function stopSecondStep(tx: PlainTx, userId: string): Promise<void> {
	await tx.sql
		.update(user)
		.set({ totpSecretSealed: null, totpLastStep: null, secondStepSince: null })
		.where(eq(user.id, userId));
	await tx.sql.delete(recoveryCode).where(eq(recoveryCode.userId, userId));
	await addToTrail(tx, {
		action: 'account.second_step_off',
		subject: { type: 'user', id: userId }
	});
}

/**
 * Passes the second step with a code of the app or a recovery code; each opens one session only.
 * @returns the cookie of a new session in place of the present one
 * @throws Refusal when the code is wrong, used, or tried too often
 */
export async function passSecondStep(
	tx: PlainTx,
	person: { userId: string; email: string; sessionId: string; userAgent: string },
	code: string
): Promise<Cookie> {
	await countAttempt('signInAccount', person.email);
	const passed = /^\d{6}$/.test(code)
		? await useTotp(tx, person, code)
		: await useRecoveryCode(tx, person.userId, code);
	if (!passed) throw new Refusal('invalid', 'This code is wrong or was used before.', 'code');
	await forgetAttempts('signInAccount', person.email);
	return openSession(tx, {
		userId: person.userId,
		userAgent: person.userAgent,
		secondStepPassed: true,
		replaces: person.sessionId
	});
}

async function useTotp(
	tx: PlainTx,
	person: { userId: string; email: string },
	code: string
): Promise<boolean> {
	const found = await tx.sql.query.user.findFirst({ where: eq(user.id, person.userId) });
	if (!found?.totpSecretSealed) return false;
	const step = acceptedStep(unseal(found.totpSecretSealed), person.email, code, Date.now());
	if (step === null) return false;
	const taken = await tx.sql
		.update(user)
		.set({ totpLastStep: step })
		.where(
			and(eq(user.id, person.userId), or(isNull(user.totpLastStep), lt(user.totpLastStep, step)))
		)
		.returning({ id: user.id });
	return taken.length === 1;
}

async function useRecoveryCode(tx: PlainTx, userId: string, code: string): Promise<boolean> {
	const taken = await tx.sql
		.update(recoveryCode)
		.set({ usedAt: new Date() })
		.where(
			and(
				eq(recoveryCode.userId, userId),
				eq(recoveryCode.codeHash, hashToken(code.toUpperCase())),
				isNull(recoveryCode.usedAt)
			)
		)
		.returning({ id: recoveryCode.id });
	if (taken.length === 1) {
		await addToTrail(tx, {
			action: 'account.recovery_code_used',
			subject: { type: 'user', id: userId }
		});
	}
	return taken.length === 1;
}

/** How many recovery codes are left. */
export function recoveryCodesLeft(tx: PlainTx, userId: string): Promise<number> {
	return tx.sql.$count(
		recoveryCode,
		and(eq(recoveryCode.userId, userId), isNull(recoveryCode.usedAt))
	);
}
