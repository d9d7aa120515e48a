import { and, eq, inArray, lt } from 'drizzle-orm';
import { order, orderLine, priceCategory } from '../db/schema';
import { databaseFault, violates } from '../db/errors';
import type { TenantTx } from '../db/transaction';
import { Refusal } from '../failures';
import { addJob } from '../jobs/add';
import { sellingObstacles } from '../payments/accounts';
import { newReference } from './codes';
import { findSlotForSale } from './slots-for-sale';

/** How long places are kept for a visitor who is paying. */
export const holdMinutes = 15;

/** Most places in one order of the public page. */
export const mostPlaces = 20;

export interface Reservation {
	/** The form's own id for the order: the same form sent twice is one order. */
	orderId: string;
	slotId: string;
	visitorName: string;
	visitorEmail: string;
	/** Places by price category; those of 0 count as absent. */
	quantities: { priceCategoryId: string; quantity: number }[];
}

/**
 * Holds places for a visitor. The slot's own counters, kept by the database, refuse one too many
 * whatever the number of buyers at once.
 * @throws Refusal when there is no room, the slot is not for sale, or nothing was chosen
 */
export async function reservePlaces(tx: TenantTx, wanted: Reservation, now: Date): Promise<void> {
	const found = await findSlotForSale(tx, wanted.slotId, now);
	if (!found) throw new Refusal('conflict', 'These minutes are no longer for sale.');
	const lines = await priceLines(tx, found.programmeId, wanted.quantities);
	const places = lines.reduce((sum, line) => sum + line.quantity, 0);
	if (places > mostPlaces) {
		throw new Refusal('invalid', `At most ${mostPlaces} places can be bought at once.`);
	}
	const totalMinor = lines.reduce((sum, line) => sum + line.grossMinor, 0);
	if (totalMinor > 0 && (await sellingObstacles(tx)).length > 0) {
		throw new Refusal('conflict', 'This operator can not take payments yet.');
	}
	await releaseLapsedHolds(tx, wanted.slotId, now);
	const holdUntil = new Date(now.getTime() + holdMinutes * 60_000);
	try {
		await tx.sql.insert(order).values({
			id: wanted.orderId,
			operatorId: tx.operatorId,
			slotId: wanted.slotId,
			reference: newReference(),
			visitorName: wanted.visitorName,
			visitorEmail: wanted.visitorEmail,
			places,
			currency: found.currency,
			totalMinor,
			holdUntil
		});
	} catch (error) {
		if (violates(error, 'slot_places')) throw noRoom(found.capacity - found.held - found.sold);
		if (violates(error, 'order_slot_open')) {
			throw new Refusal('conflict', 'These minutes are no longer for sale.');
		}
		if (databaseFault(error)?.constraint === 'order_pkey') throw new AlreadyReserved();
		throw error;
	}
	await tx.sql
		.insert(orderLine)
		.values(lines.map((line) => ({ operatorId: tx.operatorId, orderId: wanted.orderId, ...line })));
	await addJob(
		tx,
		'end_hold',
		{ operatorId: tx.operatorId, orderId: wanted.orderId },
		{ key: `hold-${wanted.orderId}`, runAt: holdUntil }
	);
}

/** The same form was sent before: its order stands. */
export class AlreadyReserved extends Error {
	override readonly name = 'AlreadyReserved';
}

function noRoom(left: number): Refusal {
	return new Refusal(
		'conflict',
		left <= 0
			? 'The last places have just been taken. Choose other minutes.'
			: `There ${left === 1 ? 'is 1 place' : `are ${left} places`} left. Choose fewer, or other minutes.`
	);
}

async function priceLines(
	tx: TenantTx,
	programmeId: string,
	quantities: Reservation['quantities']
) {
	const chosen = quantities.filter(({ quantity }) => quantity > 0);
	if (chosen.length === 0) throw new Refusal('invalid', 'Choose at least one place.');
	const categories = await tx.sql
		.select()
		.from(priceCategory)
		.where(
			and(
				eq(priceCategory.operatorId, tx.operatorId),
				eq(priceCategory.programmeId, programmeId),
				eq(priceCategory.withdrawn, false),
				inArray(
					priceCategory.id,
					chosen.map(({ priceCategoryId }) => priceCategoryId)
				)
			)
		);
	return chosen.map(({ priceCategoryId, quantity }) => {
		const category = categories.find(({ id }) => id === priceCategoryId);
		if (!category) throw new Refusal('conflict', 'A price has changed. Look at the prices again.');
		if (quantity < category.minimumQuantity) {
			throw new Refusal(
				'invalid',
				`${category.name} is sold from ${category.minimumQuantity} places.`
			);
		}
		return {
			priceCategoryId,
			name: category.name,
			quantity,
			unitGrossMinor: category.amountMinor,
			grossMinor: category.amountMinor * quantity,
			taxCategory: category.taxCategory,
			taxPercent: category.taxPercent
		};
	});
}

/** Holds that have lapsed give their places back at once, even when no worker runs just now. */
export async function releaseLapsedHolds(tx: TenantTx, slotId: string, now: Date): Promise<void> {
	// In the order of locks that every other writer uses: the orders, then their slot.
	const lapsed = await tx.sql
		.select({ id: order.id })
		.from(order)
		.where(
			and(
				eq(order.operatorId, tx.operatorId),
				eq(order.slotId, slotId),
				eq(order.status, 'pending'),
				lt(order.holdUntil, now)
			)
		)
		.for('no key update', { skipLocked: true });
	if (lapsed.length === 0) return;
	await tx.sql
		.update(order)
		.set({ status: 'expired', closedAt: now, closedReason: 'hold_lapsed' })
		.where(
			inArray(
				order.id,
				lapsed.map(({ id }) => id)
			)
		);
}
