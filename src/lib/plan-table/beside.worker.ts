import { createSite } from '../optics';
import { planCautions } from '../plan-cautions';
import type { BesideAnswer, BesideQuestion } from './beside';
import { tableDay } from './moment';
import { bandOf } from './seen';

function answerTo(question: BesideQuestion): BesideAnswer {
	if (question.kind === 'cautions') {
		return { kind: 'cautions', cautions: planCautions(question.plan, question.year) };
	}
	const { plan, date, zoneIndex } = question;
	const zone = plan.zones[zoneIndex];
	const site = createSite({ ...plan, zones: zone ? [zone] : [] });
	return { kind: 'band', band: bandOf(site, tableDay(plan.timeZone, date), 0) };
}

self.onmessage = ({ data }: MessageEvent<BesideQuestion>) => self.postMessage(answerTo(data));
