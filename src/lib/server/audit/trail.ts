import { and, desc, eq, gte, ilike, lt, type SQL } from 'drizzle-orm';
import { demand } from '../auth/rights';
import { trail } from '../db/schema';
import type { PlainTx, TenantTx } from '../db/transaction';

export interface TrailEntry {
	/** Verb in the form `thing.done`. */
	action: string;
	subject: { type: string; id?: string };
	before?: Record<string, unknown>;
	after?: Record<string, unknown>;
}

/** Adds to the trail, in the transaction of the act itself. */
export async function addToTrail(tx: TenantTx | PlainTx, entry: TrailEntry): Promise<void> {
	const { actor } = tx;
	await tx.sql.insert(trail).values({
		operatorId: tx.operatorId,
		actorKind: actor.kind,
		actorUserId: 'userId' in actor ? actor.userId : null,
		actorName: actor.name,
		action: entry.action,
		subjectType: entry.subject.type,
		subjectId: entry.subject.id ?? null,
		before: entry.before ?? null,
		after: entry.after ?? null,
		requestId: tx.requestId
	});
}

export interface TrailFilter {
	/** Part of the actor's name. */
	who?: string;
	/** Start of the action, for example `member`. */
	what?: string;
	/** Instants: from inclusive, to exclusive. */
	from?: Date;
	to?: Date;
	/** The last row already seen; ids are sortable by time. */
	after?: string;
	/** Rows a page, 1 to 200. */
	most: number;
}

/** A page of the operator's trail, newest first, and where the next page starts (null at the end). */
export async function readTrail(tx: TenantTx, filter: TrailFilter) {
	demand(tx, 'trail.read');
	const wanted: (SQL | undefined)[] = [eq(trail.operatorId, tx.operatorId)];
	if (filter.who) wanted.push(ilike(trail.actorName, `%${likeLiteral(filter.who)}%`));
	if (filter.what) wanted.push(ilike(trail.action, `${likeLiteral(filter.what)}%`));
	if (filter.from) wanted.push(gte(trail.at, filter.from));
	if (filter.to) wanted.push(lt(trail.at, filter.to));
	if (filter.after) wanted.push(lt(trail.id, filter.after));
	const rows = await tx.sql
		.select()
		.from(trail)
		.where(and(...wanted))
		.orderBy(desc(trail.id))
		.limit(filter.most + 1);
	const page = rows.slice(0, filter.most);
	return { rows: page, next: rows.length > filter.most ? (page.at(-1)?.id ?? null) : null };
}

function likeLiteral(value: string): string {
	return value.replaceAll(/[\\%_]/g, (sign) => `\\${sign}`);
}
