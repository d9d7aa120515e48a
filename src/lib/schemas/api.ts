import { z } from 'zod';

/** Shapes that the API under /api/v1 answers with; the pages that fetch read them by the same. */

const instant = z.iso.datetime();
const date = z.iso.date();

export const slotAnswer = z.object({
	id: z.uuid(),
	zone: z.string(),
	date,
	startsAt: instant,
	endsAt: instant,
	status: z.enum(['open', 'paused', 'called_off']),
	capacity: z.int(),
	placesLeft: z.int(),
	/** Median arc of bow in the middle of the slot, degrees. */
	arcDeg: z.number(),
	/** Share of the zone that has the bow then, 0 to 1. */
	share: z.number(),
	lookAzimuthDeg: z.number()
});

export const slotsAnswer = z.object({
	site: z.string(),
	timeZone: z.string(),
	currency: z.string(),
	slots: z.array(slotAnswer)
});

export const windowsAnswer = z.object({
	site: z.string(),
	timeZone: z.string(),
	windows: z.array(
		z.object({
			zone: z.string(),
			date,
			startsAt: instant,
			endsAt: instant,
			peakShare: z.number(),
			peakArcDeg: z.number()
		})
	)
});

export const orderAnswer = z.object({
	reference: z.string(),
	status: z.enum(['pending', 'paid', 'expired', 'cancelled']),
	places: z.int(),
	holdUntil: instant,
	totalMinor: z.int(),
	currency: z.string(),
	refundedMinor: z.int()
});

export const progressAnswer = z.object({
	state: z.enum(['waiting', 'running', 'done', 'failed']),
	daysDone: z.int(),
	daysTotal: z.int()
});

/** An error as problem details (RFC 9457), `application/problem+json`. */
export const problem = z.object({
	type: z.string(),
	title: z.string(),
	status: z.int(),
	detail: z.string(),
	requestId: z.string().optional()
});

export type SlotsAnswer = z.infer<typeof slotsAnswer>;
export type WindowsAnswer = z.infer<typeof windowsAnswer>;
export type OrderAnswer = z.infer<typeof orderAnswer>;
