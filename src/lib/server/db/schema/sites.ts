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
	pgTable,
	text,
	unique,
	uniqueIndex,
	uuid
} from 'drizzle-orm/pg-core';
import type { Plan } from '../../../schemas/plan';
import { bytes, createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';

/** A picture as it is served: re-encoded by us, without the metadata it came with. */
export const picture = pgTable(
	'picture',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		contentType: text('content_type').notNull(),
		widthPx: integer('width_px').notNull(),
		heightPx: integer('height_px').notNull(),
		content: bytes('content').notNull(),
		createdAt: createdAt()
	},
	(t) => [unique('picture_operator_id_id_key').on(t.operatorId, t.id), tenantPolicy('picture')]
);

/** One place with an installation. */
export const site = pgTable(
	'site',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		slug: text('slug').notNull(),
		name: text('name').notNull(),
		/** Datum, WGS 84. */
		latitudeDeg: doublePrecision('latitude_deg').notNull(),
		longitudeDeg: doublePrecision('longitude_deg').notNull(),
		elevationM: doublePrecision('elevation_m').notNull(),
		timeZone: text('time_zone').notNull(),
		/** ISO 4217; every price of the site is in it. */
		currency: text('currency').notNull(),
		/** For visitors: what they see, and how to get there. */
		description: text('description').notNull().default(''),
		arrival: text('arrival').notNull().default(''),
		pictureId: uuid('picture_id'),
		pictureAlt: text('picture_alt').notNull().default(''),
		/** Gusts from which the weather watch suggests to call off, m/s. */
		gustLimitMs: doublePrecision('gust_limit_ms').notNull().default(12),
		/** Visitors can see the site's page. */
		open: boolean('open').notNull().default(false),
		createdAt: createdAt()
	},
	(t) => [
		unique('site_operator_id_id_key').on(t.operatorId, t.id),
		unique('site_operator_id_slug_key').on(t.operatorId, t.slug),
		foreignKey({
			name: 'site_picture_fk',
			columns: [t.operatorId, t.pictureId],
			foreignColumns: [picture.operatorId, picture.id]
		}),
		check('site_latitude', sql`${t.latitudeDeg} between -90 and 90`),
		check('site_longitude', sql`${t.longitudeDeg} between -180 and 180`),
		check('site_currency', sql`${t.currency} ~ '^[A-Z]{3}$'`),
		tenantPolicy('site')
	]
);

/**
 * A numbered version of a site's plan. Its body is in the words of the plan file; the site's place and
 * zone stand in it too, as they were. A version that was ever live never changes (trigger).
 */
export const plan = pgTable(
	'plan',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		version: integer('version').notNull(),
		body: jsonb('body').$type<Plan>().notNull(),
		state: text('state', { enum: ['draft', 'live', 'retired'] })
			.notNull()
			.default('draft'),
		/** First time that it went live. */
		liveSince: instant('live_since'),
		/** Counts saves of a draft: a second editor's save on an older count is refused. */
		revision: integer('revision').notNull().default(1),
		createdAt: createdAt(),
		changedAt: instant('changed_at').notNull().defaultNow()
	},
	(t) => [
		unique('plan_operator_id_id_key').on(t.operatorId, t.id),
		unique('plan_site_version_key').on(t.operatorId, t.siteId, t.version),
		uniqueIndex('plan_one_live_key')
			.on(t.operatorId, t.siteId)
			.where(sql`state = 'live'`),
		foreignKey({
			name: 'plan_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		check('plan_live_since', sql`(state = 'draft') = (live_since is null)`),
		tenantPolicy('plan')
	]
);

/** A viewing zone of a site. Plan versions speak of it by name, so it outlives each of them. */
export const zone = pgTable(
	'zone',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		name: text('name').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('zone_operator_id_id_key').on(t.operatorId, t.id),
		unique('zone_operator_site_id_key').on(t.operatorId, t.siteId, t.id),
		unique('zone_site_name_key').on(t.operatorId, t.siteId, t.name),
		foreignKey({
			name: 'zone_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		tenantPolicy('zone')
	]
);

/** A run of the engine over one plan version and a range of local dates. */
export const computation = pgTable(
	'computation',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		planId: uuid('plan_id').notNull(),
		/** Local dates, both counted. */
		fromDate: date('from_date').notNull(),
		toDate: date('to_date').notNull(),
		engineVersion: text('engine_version').notNull(),
		/** SHA-256 of what the engine read: the same inputs are computed once. */
		inputHash: text('input_hash').notNull(),
		state: text('state', { enum: ['waiting', 'running', 'done', 'failed'] })
			.notNull()
			.default('waiting'),
		daysDone: integer('days_done').notNull().default(0),
		daysTotal: integer('days_total').notNull(),
		fault: text('fault'),
		createdAt: createdAt(),
		finishedAt: instant('finished_at')
	},
	(t) => [
		unique('computation_operator_id_id_key').on(t.operatorId, t.id),
		unique('computation_operator_plan_id_key').on(t.operatorId, t.planId, t.id),
		unique('computation_input_key').on(t.operatorId, t.planId, t.inputHash),
		foreignKey({
			name: 'computation_plan_fk',
			columns: [t.operatorId, t.planId],
			foreignColumns: [plan.operatorId, plan.id]
		}),
		tenantPolicy('computation')
	]
);

/** An interval in which a zone is open to the bow. Written once, never changed (no such grant). */
export const bowWindow = pgTable(
	'bow_window',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		computationId: uuid('computation_id').notNull(),
		planId: uuid('plan_id').notNull(),
		zoneId: uuid('zone_id').notNull(),
		/** Local date on which it starts. */
		localDate: date('local_date').notNull(),
		startsAt: instant('starts_at').notNull(),
		endsAt: instant('ends_at').notNull(),
		peakShare: doublePrecision('peak_share').notNull(),
		peakArcDeg: doublePrecision('peak_arc_deg').notNull()
	},
	(t) => [
		unique('bow_window_operator_id_id_key').on(t.operatorId, t.id),
		// What a slot points at: the window together with the very interval the slot must lie in.
		unique('bow_window_interval_key').on(t.operatorId, t.id, t.zoneId, t.startsAt, t.endsAt),
		index('bow_window_zone_index').on(t.operatorId, t.zoneId, t.localDate),
		index('bow_window_computation_index').on(t.operatorId, t.computationId, t.localDate),
		foreignKey({
			name: 'bow_window_computation_fk',
			columns: [t.operatorId, t.planId, t.computationId],
			foreignColumns: [computation.operatorId, computation.planId, computation.id]
		}),
		foreignKey({
			name: 'bow_window_zone_fk',
			columns: [t.operatorId, t.zoneId],
			foreignColumns: [zone.operatorId, zone.id]
		}),
		check('bow_window_order', sql`starts_at < ends_at`),
		tenantPolicy('bow_window')
	]
);
