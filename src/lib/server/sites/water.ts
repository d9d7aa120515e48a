import { and, asc, desc, eq, inArray, isNull, lte } from 'drizzle-orm';
import { formatDate } from '../../format';
import { addDays, localClock } from '../../schedule';
import { addToTrail } from '../audit/trail';
import { demand } from '../auth/rights';
import { member, operator, site, user, waterEntry } from '../db/schema';
import { inPlatform, inTenant, type TenantTx } from '../db/transaction';
import { env } from '../env';
import { Refusal } from '../failures';
import { writeLetter } from '../mail/outbox';
import { readOperator } from '../operators/operators';
import { demandSite } from './sites';

export type WaterEntry = typeof waterEntry.$inferSelect;
export type WaterKind = WaterEntry['kind'];

/** What a site in use is expected to have on record; how often is for local codes to say. */
const expected = ['disinfection', 'sample'] as const satisfies readonly WaterKind[];

export const waterKindNames: Record<WaterKind, string> = {
	disinfection: 'Disinfection',
	sample: 'Sample',
	inspection: 'Inspection'
};

/** Adds what was done. */
export async function addWaterEntry(
	tx: TenantTx,
	slug: string,
	wanted: { kind: WaterKind; doneOn: string; nextDueOn: string | null; note: string },
	now: Date
): Promise<void> {
	demand(tx, 'sites.write');
	if (tx.actor.kind !== 'member') throw new Error('a member keeps the water log');
	const found = await demandSite(tx, slug);
	const today = localClock(found.timeZone).dateAt(now.getTime());
	if (wanted.doneOn > today) {
		throw new Refusal('invalid', 'The log is for what has been done.', 'doneOn');
	}
	if (wanted.nextDueOn !== null && wanted.nextDueOn < wanted.doneOn) {
		throw new Refusal('invalid', 'It is due again before it was done.', 'nextDueOn');
	}
	const [made] = await tx.sql
		.insert(waterEntry)
		.values({
			operatorId: tx.operatorId,
			siteId: found.id,
			...wanted,
			notedBy: tx.actor.userId,
			notedByName: tx.actor.name
		})
		.returning({ id: waterEntry.id });
	await addToTrail(tx, {
		action: 'water.noted',
		subject: { type: 'water_entry', id: made!.id },
		after: { site: slug, ...wanted }
	});
}

/** A site's log, newest first. */
export function listWater(tx: TenantTx, siteId: string): Promise<WaterEntry[]> {
	demand(tx, 'sites.read');
	return tx.sql.query.waterEntry.findMany({
		where: and(eq(waterEntry.operatorId, tx.operatorId), eq(waterEntry.siteId, siteId)),
		orderBy: [desc(waterEntry.doneOn), desc(waterEntry.id)],
		limit: 500
	});
}

/** The newest entry of each kind. */
function newestOf(entries: WaterEntry[]): WaterEntry[] {
	const seen = new Set<WaterKind>();
	return entries.filter(({ kind }) => !seen.has(kind) && seen.add(kind));
}

/**
 * What is out of date in a site's log, in words; empty when nothing is. A warning, never a gate: the
 * product does not know which rules hold at the site.
 * @param today local date of the site
 */
export async function waterWarnings(
	tx: TenantTx,
	siteId: string,
	today: string
): Promise<string[]> {
	const newest = newestOf(await listWater(tx, siteId));
	const warnings = expected
		.filter((kind) => !newest.some((entry) => entry.kind === kind))
		.map((kind) => `The water log has no ${waterKindNames[kind].toLowerCase()} yet.`);
	for (const { kind, nextDueOn } of newest) {
		if (nextDueOn !== null && nextDueOn < today) {
			warnings.push(`${waterKindNames[kind]} of the water was due on ${formatDate(nextDueOn)}.`);
		}
	}
	return warnings;
}

const origin = { actor: { kind: 'worker', name: 'water log' } } as const;

/** A letter goes out so many days before something is due. */
const daysAhead = 3;

/** The daily round: owners and planners are told of what is due soon, once for each entry. */
export async function remindOfWater(): Promise<void> {
	const operators = await inPlatform(origin, (tx) =>
		tx.sql.select({ id: operator.id }).from(operator).where(eq(operator.status, 'open'))
	);
	for (const { id } of operators) {
		await inTenant(id, origin, (tx) => remindOperator(tx, new Date()));
	}
}

/** Writes the letters of one operator. */
export async function remindOperator(tx: TenantTx, now: Date): Promise<void> {
	const sites = await tx.sql.query.site.findMany({ where: eq(site.operatorId, tx.operatorId) });
	for (const found of sites) {
		const soon = addDays(localClock(found.timeZone).dateAt(now.getTime()), daysAhead);
		const newest = newestOf(await listWater(tx, found.id));
		const due = newest.filter(
			({ nextDueOn, remindedAt }) => nextDueOn !== null && nextDueOn <= soon && remindedAt === null
		);
		if (due.length === 0) continue;
		// Of two rounds at once only one finds an entry unmarked.
		const marked = await tx.sql
			.update(waterEntry)
			.set({ remindedAt: now })
			.where(
				and(
					eq(waterEntry.operatorId, tx.operatorId),
					inArray(
						waterEntry.id,
						due.map((entry) => entry.id)
					),
					lte(waterEntry.nextDueOn, soon),
					isNull(waterEntry.remindedAt)
				)
			)
			.returning();
		if (marked.length > 0) await writeReminders(tx, found, marked);
	}
}

async function writeReminders(
	tx: TenantTx,
	found: typeof site.$inferSelect,
	due: WaterEntry[]
): Promise<void> {
	const { name, slug } = await readOperator(tx);
	const people = await tx.sql
		.select({ email: user.email, name: user.name })
		.from(member)
		.innerJoin(user, eq(user.id, member.userId))
		.where(and(eq(member.operatorId, tx.operatorId), inArray(member.role, ['owner', 'planner'])))
		.orderBy(asc(user.email));
	for (const person of people) {
		await writeLetter(tx, {
			kind: 'water_due',
			to: person.email,
			content: {
				subject: `Water of ${found.name}: due soon`,
				greeting: `Dear ${person.name},`,
				paragraphs: [
					`the water log of ${found.name} says what is due:`,
					due
						.map(({ kind, nextDueOn }) => `${waterKindNames[kind]}: ${formatDate(nextDueOn!)}`)
						.join('\n'),
					'Warm or standing water can carry Legionella. Local codes and licensed practice decide what has to be done.'
				],
				action: {
					label: 'Open the water log',
					url: `${env().ORIGIN}/desk/${slug}/sites/${found.slug}/water`
				},
				from: name
			}
		});
	}
}
