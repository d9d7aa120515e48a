import { isLocalDate, type LocalDate } from '../schedule';

/** What of a year sheet its address names, so that it can be kept, sent and loaded anew. */
export interface SheetAddress {
	readonly version: number | null;
	readonly zone: string | null;
	readonly day: LocalDate | null;
	/** Id of a programme, or `typed`. */
	readonly programme: string | null;
}

/** Reads an address; what is no version or day is as if it were not there. */
export function readAddress(parameters: URLSearchParams): SheetAddress {
	const version = parameters.get('version') ?? '';
	const day = parameters.get('day') ?? '';
	return {
		version: /^\d{1,6}$/.test(version) ? Number(version) : null,
		zone: parameters.get('zone'),
		day: isLocalDate(day) ? day : null,
		programme: parameters.get('programme')
	};
}

/** Writes an address, such as `version=3&zone=Terrace&day=2027-03-02`; the day names the year. */
export function writeAddress({ version, zone, day, programme }: SheetAddress): string {
	const named = { version: version === null ? null : String(version), zone, day, programme };
	const parameters = new URLSearchParams();
	for (const [name, value] of Object.entries(named)) {
		if (value) parameters.set(name, value);
	}
	return parameters.toString();
}
