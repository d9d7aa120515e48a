import ical, { ICalCalendarMethod, ICalEventTransparency } from 'ical-generator';
import { formatMinutes, formatShare } from '../format';
import type { BowWindow } from '../optics';
import type { ExportOf } from './export-tables';

/**
 * The windows as a calendar (RFC 5545), an entry each, times in UTC. Two exports of one site and zone name
 * the same window alike, so that reading a newer file replaces its entries.
 * @param host part after the @ of the entries' names, @param stampedAt when the file is made
 */
export function windowsCalendar({
	of,
	windows,
	host,
	stampedAt,
	place
}: {
	of: ExportOf;
	windows: readonly BowWindow[];
	host: string;
	stampedAt: Date;
	place: { latitudeDeg: number; longitudeDeg: number };
}): string {
	const calendar = ical({
		name: `Bow at ${of.site}, ${of.zone}, ${of.year}`,
		prodId: { company: 'Bowkeeper', product: 'Bowkeeper' },
		method: ICalCalendarMethod.PUBLISH
	});
	const plain = (text: string) => encodeURIComponent(text).replaceAll('%', '.');
	for (const { startMs, endMs, peakShare, peakArcDeg } of windows) {
		calendar.createEvent({
			id: `bow-${plain(of.site)}-${plain(of.zone)}-${startMs / 1000}@${host}`,
			stamp: stampedAt,
			start: new Date(startMs),
			end: new Date(endMs),
			summary: `Bow, ${of.zone}`,
			description: `${formatMinutes((endMs - startMs) / 60_000)}, at best ${formatShare(peakShare)} of the zone, ${peakArcDeg.toFixed(1)} degrees of arc. Plan ${of.plan}.`,
			location: {
				title: of.site,
				geo: { lat: place.latitudeDeg, lon: place.longitudeDeg }
			},
			// A bow keeps nobody's time busy.
			transparency: ICalEventTransparency.TRANSPARENT
		});
	}
	return calendar.toString();
}
