import { foreignKey, jsonb, pgTable, text, unique, uuid } from 'drizzle-orm/pg-core';
import type { PanoramaMark } from '../../../panorama/geometry';
import type { TracePoint } from '../../../panorama/trace';
import { createdAt, id, tenantPolicy } from './columns';
import { operator } from './operators';
import { picture, site } from './sites';

/** What is marked in a panorama. */
export interface PanoramaMarking {
	marks: [PanoramaMark, PanoramaMark];
	/** The skyline as it was traced. */
	points: TracePoint[];
}

/** A picture of a site's horizon, over which its skyline is traced: one a site. */
export const panorama = pgTable(
	'panorama',
	{
		id: id(),
		operatorId: uuid('operator_id')
			.notNull()
			.references(() => operator.id),
		siteId: uuid('site_id').notNull(),
		pictureId: uuid('picture_id').notNull(),
		projection: text('projection', { enum: ['cylinder', 'sphere', 'plane'] })
			.notNull()
			.default('cylinder'),
		/** Null until somebody has set the marks. */
		marking: jsonb('marking').$type<PanoramaMarking>(),
		createdAt: createdAt()
	},
	(t) => [
		unique('panorama_operator_id_id_key').on(t.operatorId, t.id),
		unique('panorama_site_key').on(t.operatorId, t.siteId),
		foreignKey({
			name: 'panorama_site_fk',
			columns: [t.operatorId, t.siteId],
			foreignColumns: [site.operatorId, site.id]
		}),
		foreignKey({
			name: 'panorama_picture_fk',
			columns: [t.operatorId, t.pictureId],
			foreignColumns: [picture.operatorId, picture.id]
		}),
		tenantPolicy('panorama')
	]
);
