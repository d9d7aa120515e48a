import { and, eq } from 'drizzle-orm';
import { isHarsh, seenOf, targetOf, type Chosen, type Conflict } from '../../conflict-deeds';
import { localClock } from '../../schedule';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { lockSlots } from '../booking/move';
import { startSlotMove } from '../booking/move-slot';
import { keptSlot, site } from '../db/schema';
import { inTenant, type TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { listProgrammes } from '../programmes/programmes';
import { callOff } from '../weather/call-off';
import { askForWindows } from './compute';
import { readBasis, windowsFor, type Asked } from './conflict-basis';
import { compare, type Asker, type Look } from './conflicts';
import { makeLive } from './plans';
import type { Site } from './sites';

export interface Decisions {
	/** Names what was looked at. */
	digest: string;
	/** Names the choices whose numbers were told. */
	seen: string;
	chosen: Chosen[];
	/** Read by the visitors who are moved or get their money back. */
	reason: string;
}

export interface Decided {
	kept: number;
	slotMoveIds: string[];
	weatherCallId: string | null;
}

/** What the form says, as the services take it. */
export function chosenFrom({
	slotId,
	choice,
	...rest
}: {
	slotId: string[];
	choice: string[];
	digest: string;
	seen: string;
	reason: string;
}): Decisions {
	return { ...rest, chosen: slotId.map((id, i) => ({ slotId: id, choice: choice[i]! })) };
}

/** Nothing was done yet: the choices are to be seen in numbers first. */
export class NumbersFirst extends Refusal {
	constructor() {
		super(
			'conflict',
			'Nothing is done yet. See below in numbers what your choices do, then send them again.'
		);
	}
}

/**
 * Does what a person chose for the sold slots outside the live version's windows, all or nothing.
 * Slots that are not named stay undecided.
 * @throws Refusal when something has changed since they looked, or NumbersFirst
 */
export async function decideConflicts(
	asker: Asker,
	slug: string,
	decisions: Decisions,
	now: Date
): Promise<Decided> {
	return act(asker, { slug, version: null }, decisions, now, () => Promise.resolve());
}

/**
 * Makes a plan version the live one, and does what a person chose for the sold slots that no longer lie
 * in a window, all or nothing. Slots that are not named stay as they are, and undecided. The windows of the
 * seasons that are on sale are computed at once: publishing them again is what comes next.
 * @throws Refusal when something has changed since they looked, or NumbersFirst
 */
export async function goLive(
	asker: Asker,
	{ slug, version }: { slug: string; version: number },
	decisions: Decisions,
	now: Date
): Promise<Decided> {
	return act(asker, { slug, version }, decisions, now, async (tx, { plan, site: at }) => {
		if (plan.state === 'live') {
			throw new Refusal('conflict', `Version ${version} is live already.`);
		}
		await makeLive(tx, slug, version);
		await computeSeasons(tx, at, now);
	});
}

async function computeSeasons(tx: TenantTx, at: Site, now: Date): Promise<void> {
	const today = localClock(at.timeZone).dateAt(now.getTime());
	for (const { seasonFrom, seasonTo, publishedAt } of await listProgrammes(tx, at.id)) {
		if (publishedAt && seasonTo >= today) {
			await askForWindows(tx, at.id, { from: seasonFrom, to: seasonTo });
		}
	}
}

async function act(
	{ operatorId, origin }: Asker,
	asked: Asked,
	decisions: Decisions,
	now: Date,
	first: (tx: TenantTx, look: Look) => Promise<void>
): Promise<Decided> {
	const before = await inTenant(operatorId, origin, (tx) => readBasis(tx, asked, now));
	if (!before) throw new Refusal('conflict', 'No plan version is live yet.');
	// Between the transactions: the engine takes its time, and nobody waits for a lock meanwhile.
	const windows = await windowsFor(before);
	return inTenant(operatorId, origin, async (tx) => {
		demand(tx, 'conflicts.decide');
		// The site's row is the lock: of two that decide at once the second sees what the first did.
		await tx.sql
			.select({ id: site.id })
			.from(site)
			.where(and(eq(site.operatorId, operatorId), eq(site.id, before.site.id)))
			.for('no key update');
		// And from here on nobody buys in what is about to be moved or called off, nor where it goes.
		await lockSlots(tx, touchedBy(decisions.chosen));
		const basis = await readBasis(tx, asked, now);
		if (basis?.plan.id !== before.plan.id || basis.plan.revision !== before.plan.revision) {
			throw changed();
		}
		const look = compare(basis, windows);
		if (look.digest === null || look.digest !== decisions.digest) throw changed();
		if (seenOf(decisions.chosen) !== decisions.seen) throw new NumbersFirst();
		await first(tx, look);
		return apply(tx, look, decisions, now);
	});
}

/** Slots that choices change, or fill. */
function touchedBy(chosen: Chosen[]): string[] {
	return chosen.flatMap(({ slotId, choice }) => {
		const target = targetOf(choice);
		return !isHarsh(choice) ? [] : target ? [slotId, target] : [slotId];
	});
}

const changed = () =>
	new Refusal(
		'conflict',
		'Something has changed since you looked. Nothing is done; your choices are kept. See what it does now.'
	);

async function apply(
	tx: TenantTx,
	{ plan, undecided, kept }: Look,
	{ chosen, reason }: Decisions,
	now: Date
): Promise<Decided> {
	const known = new Map(
		[...undecided, ...kept.map(({ conflict }) => conflict)].map((one) => [one.slotId, one])
	);
	const wanted = chosen.map(({ slotId, choice }) => {
		const conflict = known.get(slotId);
		if (!conflict) throw changed();
		return { conflict, choice, target: targetOf(choice) };
	});
	const moves = wanted.flatMap(({ conflict, target }) => (target ? [{ conflict, target }] : []));
	const off = wanted.filter(({ choice }) => choice === 'call_off').map(({ conflict }) => conflict);
	const stay = wanted.filter(({ choice }) => choice === 'keep').map(({ conflict }) => conflict);
	if (moves.length + off.length > 0 && reason.length < 5) {
		throw new Refusal('invalid', 'Say why, in a sentence that visitors will read.', 'reason');
	}
	demandTargets(moves);
	await keep(tx, plan.id, stay);
	const slotMoveIds: string[] = [];
	for (const { conflict, target } of moves) {
		const move = { fromSlotId: conflict.slotId, toSlotId: target, words: reason };
		slotMoveIds.push(await startSlotMove(tx, move, now));
	}
	const slotIds = off.map(({ slotId }) => slotId);
	const weatherCallId = slotIds.length > 0 ? await callOff(tx, { slotIds, reason }, now) : null;
	return { kept: stay.length, slotMoveIds, weatherCallId };
}

/** Only slots that were offered are gone to: they lie in a window of the version. */
function demandTargets(moves: { conflict: Conflict; target: string }[]): void {
	for (const { conflict, target } of moves) {
		if (!conflict.targets.some(({ id }) => id === target)) {
			throw new Refusal(
				'conflict',
				'A slot that you chose to move to has no room any more, or no bow. Choose another.'
			);
		}
	}
}

async function keep(tx: TenantTx, planId: string, conflicts: Conflict[]): Promise<void> {
	if (tx.actor.kind !== 'member') throw new Error('a member decides on conflicts');
	const { userId, name } = tx.actor;
	for (const { slotId, sold, held } of conflicts) {
		const added = await tx.sql
			.insert(keptSlot)
			.values({ operatorId: tx.operatorId, planId, slotId, keptBy: userId, keptByName: name })
			.onConflictDoNothing({ target: [keptSlot.operatorId, keptSlot.planId, keptSlot.slotId] })
			.returning({ id: keptSlot.id });
		if (added.length === 0) continue;
		await addToTrail(tx, {
			action: 'slot.kept',
			subject: { type: 'slot', id: slotId },
			after: { planId, places: sold + held }
		});
	}
}
