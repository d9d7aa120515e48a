import {
	check,
	doublePrecision,
	foreignKey,
	index,
	pgTable,
	text,
	unique,
	uuid
} from 'drizzle-orm/pg-core';
import { sql } from 'drizzle-orm';
import { createdAt, id, instant, tenantPolicy } from './columns';
import { operator } from './operators';
import { slot } from './programmes';
import { site } from './sites';

/** The forecast for a coming slot, as last read, and what it suggests. */
export const slotForecast = pgTable(
	'slot_forecast',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		slotId: uuid('slot_id').notNull(),
		readAt: instant('read_at').notNull(),
		/** Direct normal irradiance, W/m2. */
		directNormalIrradianceWm2: doublePrecision('direct_normal_irradiance_wm2').notNull(),
		cloudCoverPercent: doublePrecision('cloud_cover_percent').notNull(),
		precipitationMm: doublePrecision('precipitation_mm').notNull(),
		precipitationProbabilityPercent: doublePrecision('precipitation_probability_percent').notNull(),
		temperatureC: doublePrecision('temperature_c').notNull(),
		windSpeedMs: doublePrecision('wind_speed_ms').notNull(),
		windGustsMs: doublePrecision('wind_gusts_ms').notNull(),
		suggestion: text('suggestion', { enum: ['go', 'wait', 'call_off'] }).notNull(),
		/** What the suggestion rests on, in words. */
		because: text('because').notNull()
	},
	(t) => [
		unique('slot_forecast_operator_id_id_key').on(t.operatorId, t.id),
		unique('slot_forecast_slot_key').on(t.operatorId, t.slotId),
		foreignKey({
			name: 'slot_forecast_slot_fk',
			columns: [t.operatorId, t.slotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		tenantPolicy('slot_forecast')
	]
);

/** A person's decision on slots. */
export const weatherCall = pgTable(
	'weather_call',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		decision: text('decision', { enum: ['go', 'wait', 'call_off'] }).notNull(),
		/** Read by visitors when slots are called off. */
		reason: text('reason').notNull(),
		decidedBy: uuid('decided_by').notNull(),
		decidedByName: text('decided_by_name').notNull(),
		createdAt: createdAt()
	},
	(t) => [
		unique('weather_call_operator_id_id_key').on(t.operatorId, t.id),
		index('weather_call_site_index').on(t.operatorId, t.siteId, t.createdAt),
		foreignKey({
			name: 'weather_call_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		check('weather_call_reason', sql`length(reason) > 0`),
		tenantPolicy('weather_call')
	]
);

/** The slots that a call is about. */
export const weatherCallSlot = pgTable(
	'weather_call_slot',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		weatherCallId: uuid('weather_call_id').notNull(),
		slotId: uuid('slot_id').notNull()
	},
	(t) => [
		unique('weather_call_slot_operator_id_id_key').on(t.operatorId, t.id),
		unique('weather_call_slot_key').on(t.operatorId, t.weatherCallId, t.slotId),
		index('weather_call_slot_slot_index').on(t.operatorId, t.slotId),
		foreignKey({
			name: 'weather_call_slot_call_fk',
			columns: [t.operatorId, t.weatherCallId],
			foreignColumns: [weatherCall.operatorId, weatherCall.id]
		}),
		foreignKey({
			name: 'weather_call_slot_slot_fk',
			columns: [t.operatorId, t.slotId],
			foreignColumns: [slot.operatorId, slot.id]
		}),
		tenantPolicy('weather_call_slot')
	]
);
