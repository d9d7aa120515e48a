import { formatCount, formatDayShort, formatTime } from './format';

export interface TargetSlot {
	id: string;
	zone: string;
	localDate: string;
	startsAt: Date;
	endsAt: Date;
	timeZone: string;
	placesLeft: number;
}

/** A slot that could be moved to, on one line: Tue 1 Dec, 09:20–09:40, Terrace, 3 places left. */
export function targetWords({
	localDate,
	startsAt,
	endsAt,
	timeZone,
	zone,
	placesLeft
}: TargetSlot): string {
	const times = `${formatTime(startsAt, timeZone)}–${formatTime(endsAt, timeZone)}`;
	return `${formatDayShort(localDate)}, ${times}, ${zone}, ${formatCount(placesLeft, 'place')} left`;
}
