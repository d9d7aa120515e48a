import { and, desc, eq, gte, lte, sql } from 'drizzle-orm';
import { createHash } from 'node:crypto';
import { canonicalJson } from '../../canonical';
import { createSite as createOpticsSite, windowsInPieces } from '../../optics';
import { addDays, localDayRange } from '../../schedule';
import { demand } from '../auth/rights';
import { bowWindow, computation, plan, zone } from '../db/schema';
import { inTenant, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { isUuid } from '../../ids';
import { addJob } from '../jobs/add';
import type { Attempt, TaskPayloads } from '../jobs/tasks';
import { livePlan } from './sites';

/** Goes up whenever the engine would answer otherwise for the same plan: what is stored names it. */
export const engineVersion = '1';

const origin = { actor: { kind: 'worker', name: 'windows' } } as const;

export type Computation = typeof computation.$inferSelect;

/**
 * Asks for the windows of the live plan over a range of local dates, both counted. The same plan, range
 * and engine are computed once: asked again, the first answer stands.
 * @returns the computation's id
 */
export async function askForWindows(
	tx: TenantTx,
	siteId: string,
	range: { from: string; to: string }
): Promise<string> {
	demand(tx, 'programmes.write');
	const live = await livePlan(tx, siteId);
	if (!live) throw new Refusal('conflict', 'No plan version is live yet.');
	let days: number;
	try {
		({ days } = localDayRange({ timeZone: live.body.timeZone, ...range }));
	} catch (error) {
		if (error instanceof RangeError) throw new Refusal('invalid', error.message, 'from');
		throw error;
	}
	const inputHash = createHash('sha256')
		.update(canonicalJson({ engineVersion, plan: live.body, ...range }))
		.digest('hex');
	const [made] = await tx.sql
		.insert(computation)
		.values({
			operatorId: tx.operatorId,
			planId: live.id,
			fromDate: range.from,
			toDate: range.to,
			engineVersion,
			inputHash,
			daysTotal: days
		})
		.onConflictDoNothing({
			target: [computation.operatorId, computation.planId, computation.inputHash]
		})
		.returning({ id: computation.id });
	if (made) {
		await startComputation(tx, made.id);
		return made.id;
	}
	const known = await tx.sql.query.computation.findFirst({
		where: and(
			eq(computation.operatorId, tx.operatorId),
			eq(computation.planId, live.id),
			eq(computation.inputHash, inputHash)
		)
	});
	if (!known) throw new Error('the computation that was there is gone');
	if (known.state === 'failed') {
		await tx.sql
			.update(computation)
			.set({ state: 'waiting', fault: null })
			.where(eq(computation.id, known.id));
		await startComputation(tx, known.id);
	}
	return known.id;
}

async function startComputation(tx: TenantTx, computationId: string): Promise<void> {
	await addJob(
		tx,
		'compute_windows',
		{ operatorId: tx.operatorId, computationId },
		{ key: `windows-${computationId}`, maxAttempts: 5 }
	);
}

/**
 * The job: computes in pieces, each stored with the count of days in one transaction, so that the page
 * shows how far it is, a killed worker's successor goes on where it stopped, and of two that run at once
 * one stops.
 */
export async function computeWindows(
	{ operatorId, computationId }: TaskPayloads['compute_windows'],
	attempt: Attempt
): Promise<void> {
	const started = await inTenant(operatorId, origin, async (tx) => {
		const [found] = await tx.sql
			.select({ run: computation, body: plan.body, siteId: plan.siteId })
			.from(computation)
			.innerJoin(plan, eq(plan.id, computation.planId))
			.where(and(eq(computation.operatorId, operatorId), eq(computation.id, computationId)));
		if (!found || found.run.state === 'done') return null;
		await tx.sql
			.update(computation)
			.set({ state: 'running' })
			.where(eq(computation.id, computationId));
		const zones = await tx.sql.query.zone.findMany({
			where: and(eq(zone.operatorId, operatorId), eq(zone.siteId, found.siteId))
		});
		return { ...found, zoneIds: new Map(zones.map(({ id, name }) => [name, id])) };
	});
	if (!started) return;
	try {
		await computePieces(operatorId, started);
	} catch (error) {
		if (attempt.number >= attempt.of) {
			await inTenant(operatorId, origin, (tx) =>
				tx.sql
					.update(computation)
					.set({ state: 'failed', fault: 'The computation stopped with a fault.' })
					.where(eq(computation.id, computationId))
			);
		}
		throw error;
	}
}

async function computePieces(
	operatorId: string,
	{
		run,
		body,
		zoneIds
	}: { run: Computation; body: typeof plan.$inferSelect.body; zoneIds: Map<string, string> }
): Promise<void> {
	const site = createOpticsSite(body);
	let { daysDone } = run;
	if (run.daysDone < run.daysTotal) {
		const from = addDays(run.fromDate, run.daysDone);
		for await (const piece of windowsInPieces({ site, from, to: run.toDate, daysPerPiece: 14 })) {
			const rows = piece.zones.flatMap(({ zone: name, windows }) =>
				windows.map((window) => ({
					operatorId,
					computationId: run.id,
					planId: run.planId,
					zoneId: zoneIds.get(name)!,
					localDate: window.date,
					startsAt: new Date(window.startMs),
					endsAt: new Date(window.endMs),
					peakShare: window.peakShare,
					peakArcDeg: window.peakArcDeg
				}))
			);
			const stored = await inTenant(operatorId, origin, async (tx) => {
				// Whoever else computes the same has moved the count: then these days are stored already.
				const mine = await tx.sql
					.update(computation)
					.set({ daysDone: run.daysDone + piece.daysDone })
					.where(and(eq(computation.id, run.id), eq(computation.daysDone, daysDone)))
					.returning({ id: computation.id });
				if (mine.length === 0) return false;
				if (rows.length > 0) await tx.sql.insert(bowWindow).values(rows);
				return true;
			});
			if (!stored) return;
			daysDone = run.daysDone + piece.daysDone;
		}
	}
	await inTenant(operatorId, origin, (tx) =>
		tx.sql
			.update(computation)
			.set({ state: 'done', finishedAt: new Date() })
			.where(eq(computation.id, run.id))
	);
}

/** One computation. @throws Refusal (not_found) */
export async function demandComputation(tx: TenantTx, id: string): Promise<Computation> {
	demand(tx, 'sites.read');
	const found = isUuid(id)
		? await tx.sql.query.computation.findFirst({
				where: and(eq(computation.operatorId, tx.operatorId), eq(computation.id, id))
			})
		: undefined;
	if (!found) throw new Refusal('not_found', 'There is no such computation.');
	return found;
}

/** Computations of a site's live plan, newest first, with how many windows each has found. */
export async function listComputations(tx: TenantTx, siteId: string) {
	demand(tx, 'sites.read');
	const live = await livePlan(tx, siteId);
	if (!live) return [];
	return tx.sql
		.select({
			id: computation.id,
			fromDate: computation.fromDate,
			toDate: computation.toDate,
			state: computation.state,
			daysDone: computation.daysDone,
			daysTotal: computation.daysTotal,
			fault: computation.fault,
			windows: sql<number>`(select count(*)::int from bow_window w where w.operator_id = computation.operator_id and w.computation_id = computation.id)`
		})
		.from(computation)
		.where(and(eq(computation.operatorId, tx.operatorId), eq(computation.planId, live.id)))
		.orderBy(desc(computation.createdAt))
		.limit(20);
}

/** The newest finished computation of the live plan that covers a range of local dates; else null. */
export async function findComputation(
	tx: TenantTx,
	siteId: string,
	{ from, to }: { from: string; to: string }
): Promise<Computation | null> {
	const live = await livePlan(tx, siteId);
	if (!live) return null;
	const found = await tx.sql.query.computation.findFirst({
		where: and(
			eq(computation.operatorId, tx.operatorId),
			eq(computation.planId, live.id),
			eq(computation.state, 'done'),
			lte(computation.fromDate, from),
			gte(computation.toDate, to)
		),
		orderBy: desc(computation.createdAt)
	});
	return found ?? null;
}

export interface StoredWindow {
	id: string;
	zoneId: string;
	zone: string;
	localDate: string;
	startsAt: Date;
	endsAt: Date;
	peakShare: number;
	peakArcDeg: number;
}

/** Stored windows of a computation on a range of local dates, in order of time. */
export function readWindows(
	tx: TenantTx,
	computationId: string,
	{ from, to, zoneId }: { from: string; to: string; zoneId?: string }
): Promise<StoredWindow[]> {
	return tx.sql
		.select({
			id: bowWindow.id,
			zoneId: bowWindow.zoneId,
			zone: zone.name,
			localDate: bowWindow.localDate,
			startsAt: bowWindow.startsAt,
			endsAt: bowWindow.endsAt,
			peakShare: bowWindow.peakShare,
			peakArcDeg: bowWindow.peakArcDeg
		})
		.from(bowWindow)
		.innerJoin(zone, eq(zone.id, bowWindow.zoneId))
		.where(
			and(
				eq(bowWindow.operatorId, tx.operatorId),
				eq(bowWindow.computationId, computationId),
				gte(bowWindow.localDate, from),
				lte(bowWindow.localDate, to),
				...(zoneId ? [eq(bowWindow.zoneId, zoneId)] : [])
			)
		)
		.orderBy(bowWindow.startsAt);
}

/** Windows of the live plan on a range of dates, wherever computed; none where nothing was computed. */
export async function windowsOfSite(
	tx: TenantTx,
	siteId: string,
	range: { from: string; to: string }
): Promise<StoredWindow[]> {
	const found = await findComputation(tx, siteId, range);
	return found ? readWindows(tx, found.id, range) : [];
}
