/** The one formatter of instants: 1 Dec 2026, 09:20 UTC. */
export function formatInstant(at: Date, timeZone: string): string {
	return new Intl.DateTimeFormat('en-GB', {
		day: 'numeric',
		month: 'short',
		year: 'numeric',
		hour: '2-digit',
		minute: '2-digit',
		timeZone,
		timeZoneName: 'short'
	}).format(at);
}
