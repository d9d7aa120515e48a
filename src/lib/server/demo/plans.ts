import type { Plan } from '../../schemas/plan';

/** An invented terrace in the hills: two curtains on the west and north, a shed that shades. */
export const quarryPlan: Plan = {
	name: 'Quarry terrace',
	latitude: 45.9312,
	longitude: 6.8745,
	elevation: 512,
	timeZone: 'Europe/Paris',
	skyline: [
		[0, 6],
		[60, 9.5],
		[95, 4],
		[140, 3],
		[200, 2.5],
		[250, 5],
		[300, 11],
		[340, 8]
	],
	curtains: [
		{
			name: 'West curtain',
			from: [-14, -6],
			to: [-14, 10],
			bottom: 0.3,
			top: 6.5,
			dropDiameter: 420,
			waterFlow: 38
		},
		{
			name: 'North curtain',
			from: [-12, 13],
			to: [8, 13],
			bottom: 0.3,
			top: 5.5,
			dropDiameter: 260,
			waterFlow: 31
		}
	],
	walls: [{ name: 'Crane shed', from: [20, -30], to: [32, -18], bottom: 0, top: 9 }],
	zones: [
		{
			name: 'Terrace',
			outline: [
				[-6, -5],
				[6, -5],
				[6, 5],
				[-6, 5]
			],
			floor: 0,
			eyeHeights: [1.15, 1.65]
		}
	],
	rule: { minimumArc: 45, minimumShare: 0.7, minimumSunAltitude: 3 }
};

/** An invented garden by the sea, far east: fine mist, one long curtain to the north and one to the east. */
export const kilnPlan: Plan = {
	name: 'Kiln garden',
	latitude: 34.7,
	longitude: 137.2,
	elevation: 24,
	timeZone: 'Asia/Tokyo',
	skyline: [
		[0, 4],
		[90, 1.5],
		[180, 0.5],
		[270, 3]
	],
	curtains: [
		{
			name: 'Long curtain',
			from: [-16, 11],
			to: [16, 11],
			bottom: 0.4,
			top: 7,
			dropDiameter: 180,
			waterTemperature: 12
		},
		{
			name: 'East curtain',
			from: [15, -9],
			to: [15, 9],
			bottom: 0.4,
			top: 6,
			dropDiameter: 180,
			waterTemperature: 12
		}
	],
	walls: [{ name: 'Kiln house', from: [-24, -14], to: [-24, -2], bottom: 0, top: 5 }],
	zones: [
		{
			name: 'Gravel court',
			outline: [
				[-7, -6],
				[7, -6],
				[7, 4],
				[-7, 4]
			],
			floor: 0,
			eyeHeights: [1.1, 1.6]
		}
	],
	rule: { minimumArc: 45, minimumShare: 0.6, minimumSunAltitude: 3 }
};
