import { sql } from 'drizzle-orm';
import { check, foreignKey, index, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import { createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';
import { order } from './orders';
import { slot } from './programmes';
import { plan } from './sites';

/** A decision to move everybody of a slot to another one. Written once (no other grant). */
export const slotMove = pgTable(
	'slot_move',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		fromSlotId: uuid('from_slot_id').notNull(),
		toSlotId: uuid('to_slot_id').notNull(),
		/** Read by visitors in their letter. */
		words: text('words').notNull().default(''),
		decidedBy: uuid('decided_by').notNull(),
		decidedByName: text('decided_by_name').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('slot_move_operator_id_id_key').on(t.operatorId, t.id),
		index('slot_move_from_index').on(t.operatorId, t.fromSlotId),
		index('slot_move_to_index').on(t.operatorId, t.toSlotId),
		foreignKey({
			name: 'slot_move_from_fk',
			columns: [t.operatorId, t.fromSlotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		foreignKey({
			name: 'slot_move_to_fk',
			columns: [t.operatorId, t.toSlotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		tenantPolicy('slot_move')
	]
);

/** One order of a slot that is being moved, and what became of it. */
export const slotMoveOrder = pgTable(
	'slot_move_order',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		slotMoveId: uuid('slot_move_id').notNull(),
		orderId: uuid('order_id').notNull(),
		/** gone: it had left the slot, was cancelled or never paid, when its turn came. */
		state: text('state', { enum: ['waiting', 'moved', 'failed', 'gone'] })
			.notNull()
			.default('waiting'),
		/** Why it failed, in words. */
		fault: text('fault'),
		doneAt: instant('done_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('slot_move_order_operator_id_id_key').on(t.operatorId, t.id),
		unique('slot_move_order_key').on(t.operatorId, t.slotMoveId, t.orderId),
		index('slot_move_order_order_index').on(t.operatorId, t.orderId),
		foreignKey({
			name: 'slot_move_order_move_fk',
			columns: [t.operatorId, t.slotMoveId],
			foreignColumns: [slotMove.operatorId, slotMove.id]
		}),
		foreignKey({
			name: 'slot_move_order_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		check('slot_move_order_fault', sql`(state = 'failed') = (fault is not null)`),
		check('slot_move_order_done', sql`(state = 'waiting') = (done_at is null)`),
		tenantPolicy('slot_move_order')
	]
);

/** An order that went to another slot. Its id comes from the form, so that one form is one move. */
export const orderMove = pgTable(
	'order_move',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		orderId: uuid('order_id').notNull(),
		fromSlotId: uuid('from_slot_id').notNull(),
		toSlotId: uuid('to_slot_id').notNull(),
		/** Moved by the operator's own wish, the visitor may cancel for all of the money. */
		wishedBy: text('wished_by', { enum: ['visitor', 'operator'] }).notNull(),
		/** Read by the visitor. */
		words: text('words').notNull().default(''),
		/** The decision on the whole slot that it was part of. */
		slotMoveId: uuid('slot_move_id'),
		movedByName: text('moved_by_name').notNull(),
		/** When it was written, under the order's lock: moves of an order follow one another by it. */
		createdAt: instant('created_at')
			.notNull()
			.default(sql`clock_timestamp()`)
	},
	(t) => [
		unique('order_move_operator_id_id_key').on(t.operatorId, t.id),
		// A job that runs again after a crash never moves an order twice.
		unique('order_move_slot_move_key').on(t.operatorId, t.slotMoveId, t.orderId),
		index('order_move_order_index').on(t.operatorId, t.orderId, t.createdAt),
		index('order_move_from_index').on(t.operatorId, t.fromSlotId),
		index('order_move_to_index').on(t.operatorId, t.toSlotId),
		foreignKey({
			name: 'order_move_order_fk',
			columns: [t.operatorId, t.orderId],
			foreignColumns: [order.operatorId, order.id]
		}),
		foreignKey({
			name: 'order_move_from_fk',
			columns: [t.operatorId, t.fromSlotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		foreignKey({
			name: 'order_move_to_fk',
			columns: [t.operatorId, t.toSlotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		foreignKey({
			name: 'order_move_slot_move_fk',
			columns: [t.operatorId, t.slotMoveId],
			foreignColumns: [slotMove.operatorId, slotMove.id]
		}),
		tenantPolicy('order_move')
	]
);

/**
 * A person's decision that a sold slot stays though it lies in no window of a plan version. For that
 * version it is not asked again. Written once (no other grant).
 */
export const keptSlot = pgTable(
	'kept_slot',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		planId: uuid('plan_id').notNull(),
		slotId: uuid('slot_id').notNull(),
		keptBy: uuid('kept_by').notNull(),
		keptByName: text('kept_by_name').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('kept_slot_operator_id_id_key').on(t.operatorId, t.id),
		unique('kept_slot_key').on(t.operatorId, t.planId, t.slotId),
		index('kept_slot_slot_index').on(t.operatorId, t.slotId),
		foreignKey({
			name: 'kept_slot_plan_fk',
			columns: [t.operatorId, t.planId],
			foreignColumns: [plan.operatorId, plan.id]
		}),
		foreignKey({
			name: 'kept_slot_slot_fk',
			columns: [t.operatorId, t.slotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		tenantPolicy('kept_slot')
	]
);
