import { decimalAmount, plainPercent } from '../../money';
import { parseDates, parseHours, parsePrices, type ProgrammeForm } from '../../schemas/site';
import type { priceCategory } from '../db/schema';
import { Refusal } from '../failures';
import type { Programme, ProgrammeWanted } from './programmes';

/** What the programme's form says, as the service takes it. @throws Refusal for a price that is none */
export function programmeFromForm(form: ProgrammeForm, currency: string): ProgrammeWanted {
	const read = parsePrices(form, currency);
	if ('fault' in read) throw new Refusal('invalid', read.fault);
	return {
		name: form.name,
		zoneId: form.zoneId,
		seasonFrom: form.seasonFrom,
		seasonTo: form.seasonTo,
		openingHours: form.hours.map((typed) => parseHours(typed) ?? []),
		daysOff: [...new Set(parseDates(form.daysOff))].sort(),
		slotMinutes: form.slotMinutes,
		gapMinutes: form.gapMinutes,
		gridMinutes: form.gridMinutes,
		capacity: form.capacity,
		refundPolicy: { untilHoursBefore: form.refundHours, percent: form.refundPercent },
		prices: read.prices
	};
}

/** A stored programme as its form shows it. */
export function formFromProgramme(
	found: Programme,
	prices: (typeof priceCategory.$inferSelect)[],
	currency: string
) {
	return {
		name: found.name,
		zoneId: found.zoneId,
		seasonFrom: found.seasonFrom,
		seasonTo: found.seasonTo,
		hours: found.openingHours.map((spans) =>
			spans.map(({ from, to }) => `${from}-${to}`).join(', ')
		),
		daysOff: found.daysOff.join('\n'),
		slotMinutes: String(found.slotMinutes),
		gapMinutes: String(found.gapMinutes),
		gridMinutes: String(found.gridMinutes),
		capacity: String(found.capacity),
		refundHours: String(found.refundPolicy.untilHoursBefore),
		refundPercent: String(found.refundPolicy.percent),
		priceId: prices.map(({ id }) => id),
		priceName: prices.map(({ name }) => name),
		priceAmount: prices.map(({ amountMinor }) => decimalAmount(amountMinor, currency)),
		priceTax: prices.map(({ taxPercent }) => plainPercent(taxPercent))
	};
}
