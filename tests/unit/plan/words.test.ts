import { expect, test } from 'vitest';
import { pathWords } from '$lib/plan-words';

test.each([
	['skyline', 'Skyline'],
	['curtains[1].from[0]', 'Curtain 2, from x'],
	['curtains[1].to', 'Curtain 2, to'],
	['walls[0].top', 'Wall 1, top'],
	['zones[0].outline', 'Zone 1, corners'],
	['zones[0].outline[2][1]', 'Zone 1, corner 3 y'],
	['zones[2].eyeHeights[0]', 'Zone 3, eye height 1'],
	['rule.minimumArc', 'Rule, least arc'],
	['curtains[3]', 'Curtain 4'],
	['timeZone', 'timeZone'],
	['curtains[0].odd', 'curtains[0].odd']
])('%s is %s', (path, words) => expect(pathWords(path)).toBe(words));
