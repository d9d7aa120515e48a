import { sql } from 'drizzle-orm';
import {
	boolean,
	check,
	date,
	doublePrecision,
	foreignKey,
	index,
	integer,
	jsonb,
	numeric,
	pgTable,
	text,
	unique,
	uuid
} from 'drizzle-orm/pg-core';
import { amountMinor, createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';
import { bowWindow, site, zone } from './sites';

/** Opening hours of a weekday: wall-clock times `HH:MM`; `to` may be 24:00. Index 0 is Monday. */
export type OpeningHours = { from: string; to: string }[][];

/** What a visitor who cancels gets back: up to so many hours before the slot, so many percent. */
export interface RefundPolicy {
	untilHoursBefore: number;
	percent: number;
}

/** What is sold at a zone over a season. */
export const programme = pgTable(
	'programme',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		zoneId: uuid('zone_id').notNull(),
		name: text('name').notNull(),
		/** Local dates, both counted. */
		seasonFrom: date('season_from').notNull(),
		seasonTo: date('season_to').notNull(),
		openingHours: jsonb('opening_hours').$type<OpeningHours>().notNull(),
		daysOff: date('days_off').array().notNull().default([]),
		slotMinutes: integer('slot_minutes').notNull(),
		gapMinutes: integer('gap_minutes').notNull(),
		gridMinutes: integer('grid_minutes').notNull(),
		capacity: integer('capacity').notNull(),
		refundPolicy: jsonb('refund_policy').$type<RefundPolicy>().notNull(),
		publishedAt: instant('published_at'),
		createdAt: createdAt()
	},
	(t) => [
		unique('programme_operator_id_id_key').on(t.operatorId, t.id),
		foreignKey({
			name: 'programme_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		foreignKey({
			name: 'programme_zone_fk',
			columns: [t.operatorId, t.siteId, t.zoneId],
			foreignColumns: [zone.operatorId, zone.siteId, zone.id]
		}),
		check('programme_season', sql`season_from <= season_to`),
		check('programme_capacity', sql`capacity > 0`),
		tenantPolicy('programme')
	]
);

/** Adult, child, ...: an amount and a tax rate. Prices include tax. */
export const priceCategory = pgTable(
	'price_category',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		programmeId: uuid('programme_id').notNull(),
		name: text('name').notNull(),
		amountMinor: amountMinor('amount_minor').notNull(),
		/** Category of the tax in the sense of UNCL 5305: S standard, Z zero, E exempt. */
		taxCategory: text('tax_category', { enum: ['S', 'Z', 'E'] })
			.notNull()
			.default('S'),
		taxPercent: numeric('tax_percent', { precision: 5, scale: 2 }).notNull(),
		/** Least number of places in an order; above 1 for a price per head of a group. */
		minimumQuantity: integer('minimum_quantity').notNull().default(1),
		position: integer('position').notNull().default(0),
		/** No longer sold; kept because orders speak of it. */
		withdrawn: boolean('withdrawn').notNull().default(false)
	},
	(t) => [
		unique('price_category_operator_id_id_key').on(t.operatorId, t.id),
		index('price_category_programme_index').on(t.operatorId, t.programmeId),
		foreignKey({
			name: 'price_category_programme_fk',
			columns: [t.operatorId, t.programmeId],
			foreignColumns: [programme.operatorId, programme.id]
		}),
		check('price_category_amount', sql`amount_minor >= 0`),
		check('price_category_tax', sql`tax_percent >= 0 and tax_percent < 100`),
		tenantPolicy('price_category')
	]
);

/**
 * A bookable interval inside a window. It carries its window's interval under a foreign key, so that
 * the check below can hold it inside (promise 1); an exclusion constraint keeps slots of a zone apart
 * (promise 2); `held + sold <= capacity` holds whatever the number of buyers (promise 3).
 */
export const slot = pgTable(
	'slot',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		zoneId: uuid('zone_id').notNull(),
		programmeId: uuid('programme_id').notNull(),
		windowId: uuid('window_id').notNull(),
		windowStartsAt: instant('window_starts_at').notNull(),
		windowEndsAt: instant('window_ends_at').notNull(),
		startsAt: instant('starts_at').notNull(),
		endsAt: instant('ends_at').notNull(),
		/** Local date on which it starts. */
		localDate: date('local_date').notNull(),
		capacity: integer('capacity').notNull(),
		/** Places of orders that are being paid. */
		held: integer('held').notNull().default(0),
		/** Places of paid orders. */
		sold: integer('sold').notNull().default(0),
		status: text('status', { enum: ['open', 'paused', 'called_off'] })
			.notNull()
			.default('open'),
		/** What is seen in the middle of the slot: median arc of the eyes that have the bow, their share. */
		arcDeg: doublePrecision('arc_deg').notNull(),
		share: doublePrecision('share').notNull(),
		sunAltitudeDeg: doublePrecision('sun_altitude_deg').notNull(),
		/** Compass direction in which the bow stands: opposite the sun. */
		lookAzimuthDeg: doublePrecision('look_azimuth_deg').notNull(),
		/** Drop size of the curtains, for the colours. */
		dropDiameterUm: doublePrecision('drop_diameter_um').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('slot_operator_id_id_key').on(t.operatorId, t.id),
		index('slot_site_index').on(t.operatorId, t.siteId, t.startsAt),
		index('slot_programme_index').on(t.operatorId, t.programmeId, t.startsAt),
		foreignKey({
			name: 'slot_window_fk',
			columns: [t.operatorId, t.windowId, t.zoneId, t.windowStartsAt, t.windowEndsAt],
			foreignColumns: [
				bowWindow.operatorId,
				bowWindow.id,
				bowWindow.zoneId,
				bowWindow.startsAt,
				bowWindow.endsAt
			]
		}),
		foreignKey({
			name: 'slot_programme_fk',
			columns: [t.operatorId, t.programmeId],
			foreignColumns: [programme.operatorId, programme.id]
		}),
		foreignKey({
			name: 'slot_zone_fk',
			columns: [t.operatorId, t.siteId, t.zoneId],
			foreignColumns: [zone.operatorId, zone.siteId, zone.id]
		}),
		check(
			'slot_inside_window',
			sql`starts_at < ends_at and starts_at >= window_starts_at and ends_at <= window_ends_at`
		),
		check('slot_places', sql`held >= 0 and sold >= 0 and held + sold <= capacity`),
		tenantPolicy('slot')
	]
);
