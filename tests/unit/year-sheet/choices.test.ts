import { expect, it } from 'vitest';
import { SheetChoices, type ProgrammeChoice } from '../../../src/lib/year-sheet/choices.svelte';

const mornings: ProgrammeChoice = {
	id: 'p1',
	name: 'Mornings',
	zone: 'Terrace',
	seasonFrom: '2027-03-01',
	seasonTo: '2027-10-31',
	openingHours: Array.from({ length: 7 }, (_, day) =>
		day === 0 ? [] : [{ from: '08:30', to: '12:00' }]
	),
	daysOff: ['2027-05-01'],
	slotMinutes: 25,
	gapMinutes: 5,
	gridMinutes: 15,
	capacity: 30
};
const choicesFrom = (programmeId: string | null) =>
	new SheetChoices([mornings], { version: '1', zone: 'Lawn', year: 2027, programmeId });

it('takes hours, slots, places and zone of a programme, and its season when asked', () => {
	const choices = choicesFrom('p1');
	expect(choices.zone).toBe('Terrace');
	expect(choices.selling).toEqual({
		pattern: {
			lengthMinutes: 25,
			gapMinutes: 5,
			gridMinutes: 15,
			hours: {
				weekdays: [[], ...Array.from({ length: 6 }, () => [{ fromMinute: 510, toMinute: 720 }])],
				daysOff: ['2027-05-01']
			}
		},
		capacity: 30,
		season: null
	});
	choices.onlySeason = true;
	expect(choices.selling.season).toEqual({ from: '2027-03-01', to: '2027-10-31' });
	expect(choices.seasonTouches).toBe(true);
	choices.year = '2028';
	expect(choices.seasonTouches).toBe(false);
});

it('says what is typed wrong, and goes on with what was right', () => {
	const choices = choicesFrom(null);
	choices.workdayHours = '09:00-10:00';
	expect(choices.selling.pattern.hours.weekdays[0]).toEqual([{ fromMinute: 540, toMinute: 600 }]);
	choices.workdayHours = '10:00-09:00';
	choices.slotMinutes = 'long';
	choices.year = '20';
	expect(choices.faults).toEqual({
		workdayHours: 'Give hours such as 09:00-18:00.',
		slotMinutes: 'Give the length from 5 to 240.',
		year: 'Give a year from 1900 to 2149.'
	});
	expect(choices.selling.pattern.hours.weekdays[0]).toEqual([{ fromMinute: 540, toMinute: 600 }]);
	expect(choices.yearNumber).toBe(2027);
});
