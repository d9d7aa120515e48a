import { createHash } from 'node:crypto';
import type { Conflict } from '../../conflict-deeds';
import { dayBand } from '../../day-band';
import { coverOf } from '../../schedule';
import type { TargetSlot } from '../../slot-words';
import { inTenant, type Origin } from '../db/transaction';
import { readBasis, windowsFor, type Asked, type Basis, type SlotAt } from './conflict-basis';
import type { PlanVersion } from './plans';
import type { Site } from './sites';
import type { WindowsOn } from './windows-on';

/** So many slots to move to are offered to each. */
const mostTargets = 25;

/** Who asks, for work that computes between two transactions. */
export interface Asker {
	operatorId: string;
	origin: Origin;
}

/** How the coming sold slots of a site lie to a plan version. */
export interface Look {
	site: Site;
	plan: PlanVersion;
	/** Sold or held slots outside the version's windows of which nobody has decided yet. */
	undecided: Conflict[];
	/** Those that somebody keeps, and who. */
	kept: { conflict: Conflict; byName: string; at: Date }[];
	/** Those that are being moved away from. */
	moving: { conflict: Conflict; slotMoveId: string }[];
	/** Names what was seen; null: something was not computed yet. */
	digest: string | null;
}

/** Compares a basis with windows. Pure. */
export function compare(basis: Basis, windows: WindowsOn): Look {
	const { site, plan } = basis;
	const look: Look = { site, plan, undecided: [], kept: [], moving: [], digest: null };
	let whole = true;
	const fits = (at: SlotAt): ReturnType<typeof coverOf> | null => {
		const found = windows.of(at.zone, at.localDate);
		return found && coverOf(intervalOf(at), found);
	};
	const good = basis.candidates.filter(
		(at) => at.windowPlanId === plan.id || (fits(at)?.inside ?? false)
	);
	for (const at of basis.doubtful) {
		const cover = fits(at);
		if (!cover) whole = false;
		if (!cover || cover.inside) continue;
		const conflict = conflictOf(at, cover, basis, windows, good);
		const slotMoveId = basis.moving.get(at.id);
		const kept = basis.kept.get(at.id);
		if (slotMoveId) look.moving.push({ conflict, slotMoveId });
		else if (kept) look.kept.push({ conflict, ...kept });
		else look.undecided.push(conflict);
	}
	return { ...look, digest: whole ? digestOf(look) : null };
}

const intervalOf = ({ startsAt, endsAt }: { startsAt: Date; endsAt: Date }) => ({
	startMs: startsAt.getTime(),
	endMs: endsAt.getTime()
});

function conflictOf(
	at: SlotAt,
	cover: ReturnType<typeof coverOf>,
	basis: Basis,
	windows: WindowsOn,
	good: SlotAt[]
): Conflict {
	const { nearest } = cover;
	return {
		slotId: at.id,
		zone: at.zone,
		zoneGone: !windows.hasZone(at.zone),
		localDate: at.localDate,
		startsAt: at.startsAt,
		endsAt: at.endsAt,
		sold: at.sold,
		held: at.held,
		...(basis.sums.get(at.id) ?? { orders: 0, pending: 0, amountMinor: 0 }),
		coveredMinutes: cover.coveredMs / 60_000,
		minutes: (at.endsAt.getTime() - at.startsAt.getTime()) / 60_000,
		nearest: nearest && { startsAt: new Date(nearest.startMs), endsAt: new Date(nearest.endMs) },
		dayWindows: (windows.of(at.zone, at.localDate) ?? []).map(
			({ startMs: from, endMs: to, peakArcDeg }) => ({
				startsAt: new Date(from),
				endsAt: new Date(to),
				peakArcDeg
			})
		),
		targets: targetsOf(at, basis, good),
		failedMoveId: basis.failedMoves.get(at.id) ?? null
	};
}

/** The nearest slots in time that take everybody, in order of time. */
function targetsOf(from: SlotAt, basis: Basis, good: SlotAt[]): TargetSlot[] {
	const places = from.sold + from.held;
	const distance = ({ startsAt }: SlotAt) => Math.abs(+startsAt - +from.startsAt);
	return good
		.map((at) => ({
			at,
			placesLeft: at.capacity - at.held - at.sold - (basis.placesComing.get(at.id) ?? 0)
		}))
		.filter(({ at, placesLeft }) => at.id !== from.id && placesLeft >= places)
		.sort((a, b) => distance(a.at) - distance(b.at))
		.slice(0, mostTargets)
		.sort((a, b) => +a.at.startsAt - +b.at.startsAt)
		.map(({ at: { id, zone: name, localDate, startsAt, endsAt }, placesLeft }) => ({
			id,
			zone: name,
			localDate,
			startsAt,
			endsAt,
			timeZone: basis.site.timeZone,
			placesLeft
		}));
}

function digestOf({ plan, undecided, kept }: Look): string {
	const told = ({ slotId, sold, held, orders, pending, amountMinor }: Conflict) => [
		...[slotId, sold, held, orders, pending, amountMinor]
	];
	const all = [
		plan.id,
		plan.revision,
		plan.state,
		undecided.map(told),
		kept.map(({ conflict }) => told(conflict))
	];
	return createHash('sha256').update(JSON.stringify(all)).digest('base64url').slice(0, 22);
}

/**
 * Sold slots of a site outside the windows of a plan version, by the engine that publishing uses.
 * @param version null: the live one
 * @returns null when no version is live
 * @throws Refusal
 */
export async function lookAtConflicts(
	{ operatorId, origin }: Asker,
	asked: Asked,
	now: Date
): Promise<Look | null> {
	const basis = await inTenant(operatorId, origin, (tx) => readBasis(tx, asked, now));
	return basis && compare(basis, await windowsFor(basis));
}

/** A conflict with the band of its day: the version's windows, and the slot beside them. */
export function withBand(site: Site, conflict: Conflict) {
	const slot = { ...conflict, status: 'open', capacity: conflict.sold + conflict.held };
	const { localDate: date, dayWindows: windows } = conflict;
	return { ...conflict, band: dayBand({ site, date, windows, slots: [slot] }) };
}

/** How many sold slots of a site await a decision. @throws Refusal */
export async function countUndecided(asker: Asker, slug: string, now: Date): Promise<number> {
	const look = await lookAtConflicts(asker, { slug, version: null, counted: true }, now);
	return look?.undecided.length ?? 0;
}
