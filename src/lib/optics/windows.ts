import type { LocalDate } from '../schedule/local-clock';
import { localDayRange } from '../schedule/local-days';
import { OpenSearch } from './open-search';
import { PeakFinder } from './peaks';
import type { Site, Zone } from './site';

/** Shorter gaps are closed, and then shorter windows dropped, seconds. */
export const LEAST_SPAN_S = 60;

/** Seconds that are searched at a time. */
const PART_S = 8192;

/** An interval in which a zone is open to the bow. */
export interface BowWindow {
	/** The site's local date on which it starts, `YYYY-MM-DD`. */
	readonly date: LocalDate;
	/** First whole second that is open, milliseconds since 1970 UTC. */
	readonly startMs: number;
	/** Last whole second that is open. */
	readonly endMs: number;
	/** Greatest share of the zone's eyes that have the bow, 0 to 1. */
	readonly peakShare: number;
	/** Greatest median arc over the eyes that have the bow, degrees. */
	readonly peakArcDeg: number;
}

/** The windows of one zone. */
export interface ZoneWindows {
	readonly zone: string;
	readonly windows: readonly BowWindow[];
}

/** When a window is, without how much is seen in it. */
export type WindowSpan = Pick<BowWindow, 'date' | 'startMs' | 'endMs'>;

/** A window before its peaks are known, whole seconds since 1970. */
interface Span {
	readonly startS: number;
	readonly endS: number;
}

interface Finder {
	readonly search: OpenSearch;
	/** Made when peaks are first asked for. */
	peaks: PeakFinder | null;
}

/** What has been found out of the sky over a zone serves every range of dates that is asked for. */
const finders = new WeakMap<Site, Map<Zone, Finder>>();

function finderOf(site: Site, zone: Zone): Finder {
	let ofSite = finders.get(site);
	if (!ofSite) {
		ofSite = new Map();
		finders.set(site, ofSite);
	}
	let finder = ofSite.get(zone);
	if (!finder) {
		finder = { search: new OpenSearch(site, zone), peaks: null };
		ofSite.set(zone, finder);
	}
	return finder;
}

/**
 * The spans that start within [startS, endS), in order.
 *
 * Instants are whole seconds: a gap is as long as from the last open second before it to the first
 * after it, a span as long as from its first open second to its last. So windows as told are 60 s or
 * longer, and 60 s or more apart. The search begins a gap's length early, so that a span open before the
 * first second is known for what it is and left out, and goes on past the end until what is open then has
 * closed.
 */
function* openSpans(search: OpenSearch, startS: number, endS: number): Generator<Span> {
	const from = startS - LEAST_SPAN_S;
	let current: { startS: number; endS: number } | null = null;
	const done: Span[] = [];
	const close = () => {
		if (
			current &&
			current.startS >= startS &&
			current.startS < endS &&
			current.endS - current.startS >= LEAST_SPAN_S
		) {
			done.push(current);
		}
		current = null;
	};
	const sink = (first: number, lastS: number) => {
		if (current && first - current.endS < LEAST_SPAN_S) {
			current.endS = lastS;
			return;
		}
		close();
		current = { startS: first, endS: lastS };
	};
	const currentSpan = (): Span | null => current;
	for (let partS = from; ; partS += PART_S) {
		const open = currentSpan();
		// Past the end only a span that started before it is still followed.
		const followed = open !== null && open.startS < endS && partS - open.endS < LEAST_SPAN_S;
		if (partS >= endS && !followed) break;
		search.search(partS, partS + PART_S, sink);
		yield* done.splice(0);
	}
	close();
	yield* done;
}

interface ZoneRange {
	site: Site;
	zone: Zone;
	from: LocalDate;
	to: LocalDate;
}

/**
 * When the windows of one zone on a range of local dates are, one after the other: those of `zoneWindows`
 * without their peaks, which cost about as much again.
 *
 * A window belongs to the local date on which it starts and is followed to its end, over midnight or
 * for weeks under a midnight sun. One that was open before the first local midnight of the range is left
 * out, and so is one whose start bears a date outside the range.
 *
 * @param from first local date, @param to last, both counted, at most 1100 days
 * @throws RangeError when the dates are wrong
 */
export function* zoneSpans({ site, zone, from, to }: ZoneRange): Generator<WindowSpan> {
	const { startMs, endMs } = localDayRange({ timeZone: site.clock.timeZone, from, to });
	const { search } = finderOf(site, zone);
	for (const { startS, endS } of openSpans(
		search,
		Math.ceil(startMs / 1000),
		Math.ceil(endMs / 1000)
	)) {
		const date = site.clock.dateAt(startS * 1000);
		if (date < from || date > to) continue;
		yield { date, startMs: startS * 1000, endMs: endS * 1000 };
	}
}

/**
 * The windows of one zone on a range of local dates, one after the other, with their peaks.
 * @see zoneSpans which windows these are
 * @throws RangeError when the dates are wrong
 */
export function* zoneWindows(range: ZoneRange): Generator<BowWindow> {
	const finder = finderOf(range.site, range.zone);
	for (const span of zoneSpans(range)) {
		finder.peaks ??= new PeakFinder(range.site, range.zone);
		yield { ...span, ...finder.peaks.find(span.startMs / 1000, span.endMs / 1000) };
	}
}

/**
 * The windows of every zone of a site on a range of local dates.
 * @param from first local date `YYYY-MM-DD`, @param to last, both counted, at most 1100 days
 * @returns one entry a zone, in the plan's order
 * @throws RangeError when the dates are wrong
 */
export function findWindows({
	site,
	from,
	to
}: {
	site: Site;
	from: LocalDate;
	to: LocalDate;
}): ZoneWindows[] {
	localDayRange({ timeZone: site.clock.timeZone, from, to });
	return site.zones.map((zone) => ({
		zone: zone.name,
		windows: [...zoneWindows({ site, zone, from, to })]
	}));
}
