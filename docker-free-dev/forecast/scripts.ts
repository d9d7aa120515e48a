/** What may be scripted: five skies, and two ways in which the service itself fails. */
export const SKIES = ['clear', 'broken', 'overcast', 'gale', 'outage', 'slow'] as const;
export type SkyName = (typeof SKIES)[number];
export type WeatherName = Exclude<SkyName, 'outage' | 'slow'>;

export interface Script {
	/** Day at the place (YYYY-MM-DD), or every day. */
	date: string | 'all';
	/** Absent: every place. */
	latitude?: number;
	longitude?: number;
	sky: SkyName;
	/** For `slow`: how long the answer is held back. */
	delayMs: number;
}

const KEYS = new Set(['date', 'latitude', 'longitude', 'sky', 'delayMs']);
const LONGEST_DELAY_MS = 120_000;
const USUAL_DELAY_MS = 20_000;
/** Places closer than this, in degrees of latitude and longitude, are one place to a script. */
const SAME_PLACE_DEG = 0.05;

/** The skies laid down by the admin address. The latest that fits a day and place wins. */
export class Scripts {
	#list: Script[] = [];

	get list(): readonly Script[] {
		return this.#list;
	}

	/**
	 * Adds scripts given as JSON.
	 * @throws Error that says what is wrong; then none of them counts.
	 */
	add(given: unknown): void {
		const list = Array.isArray(given) ? given : [given];
		this.#list.push(...list.map(readScript));
	}

	clear(): void {
		this.#list = [];
	}

	/** The weather laid down for a day at a place, if any. */
	weather(date: string, latitude: number, longitude: number): WeatherName | undefined {
		const found = this.#list.findLast(
			(one) => isWeather(one.sky) && fits(one, date, latitude, longitude)
		);
		return found && isWeather(found.sky) ? found.sky : undefined;
	}

	/** How the service fails a request about these days at a place, if it does. */
	failure(dates: string[], latitude: number, longitude: number): Script | undefined {
		return this.#list.findLast(
			(one) => !isWeather(one.sky) && dates.some((date) => fits(one, date, latitude, longitude))
		);
	}
}

function isWeather(sky: SkyName): sky is WeatherName {
	return sky !== 'outage' && sky !== 'slow';
}

function fits(one: Script, date: string, latitude: number, longitude: number): boolean {
	const near = (a: number | undefined, b: number) =>
		a === undefined || Math.abs(a - b) <= SAME_PLACE_DEG;
	return (
		(one.date === 'all' || one.date === date) &&
		near(one.latitude, latitude) &&
		near(one.longitude, longitude)
	);
}

function readScript(given: unknown): Script {
	if (typeof given !== 'object' || given === null) throw new Error('A script is an object.');
	const {
		date = 'all',
		latitude,
		longitude,
		sky,
		delayMs = USUAL_DELAY_MS,
		...more
	} = given as Record<string, unknown>;
	const unknown = Object.keys(more);
	if (unknown.length > 0) {
		throw new Error(`Unknown: ${unknown.join(', ')}. A script has ${[...KEYS].join(', ')}.`);
	}
	if (!SKIES.some((name) => name === sky)) throw new Error(`sky is one of ${SKIES.join(', ')}.`);
	if (typeof date !== 'string' || !(date === 'all' || isDay(date))) {
		throw new Error('date is a day such as 2027-05-01, or "all".');
	}
	if ((latitude === undefined) !== (longitude === undefined)) {
		throw new Error('latitude and longitude come together.');
	}
	return {
		date,
		sky: sky as SkyName,
		delayMs: within(delayMs, 'delayMs', 0, LONGEST_DELAY_MS),
		...(latitude === undefined
			? {}
			: {
					latitude: within(latitude, 'latitude', -90, 90),
					longitude: within(longitude, 'longitude', -180, 180)
				})
	};
}

function isDay(text: string): boolean {
	return /^\d{4}-\d{2}-\d{2}$/.test(text) && !Number.isNaN(Date.parse(`${text}T00:00:00Z`));
}

function within(value: unknown, name: string, least: number, most: number): number {
	if (typeof value === 'number' && value >= least && value <= most) return value;
	throw new Error(`${name} is a number from ${least} to ${most}.`);
}
