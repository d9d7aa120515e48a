import { inDesk, orError } from '$lib/server/http';
import { readOperator } from '$lib/server/operators/operators';
import { addDays, localClock } from '$lib/schedule';
import { yearOfPlan } from '$lib/server/sites/plan-year';
import { demandPlan } from '$lib/server/sites/plans';
import { sheetPdf } from '$lib/server/sites/sheet';
import { demandSite } from '$lib/server/sites/sites';
import type { RequestHandler } from './$types';

/** The sheet of a plan version for those who build it, as PDF. */
export const GET: RequestHandler = async (event) => {
	const sheet = await orError(
		inDesk(event, async (tx) => {
			const site = await demandSite(tx, event.params.site);
			const plan = await demandPlan(tx, site.id, Number(event.params.version));
			return {
				operator: (await readOperator(tx)).name,
				site: site.name,
				version: plan.version,
				state: plan.state,
				changedAt: plan.changedAt,
				plan: plan.body,
				today: localClock(site.timeZone).dateAt(Date.now())
			};
		})
	);
	// In the last quarter of a year it is the next one that is planned, as on the year sheet.
	const year = Number(addDays(sheet.today, 92).slice(0, 4));
	const pdf = await sheetPdf({ ...sheet, year: await yearOfPlan(sheet.plan, year) });
	return new Response(new Uint8Array(pdf), {
		headers: {
			'content-type': 'application/pdf',
			'content-disposition': `inline; filename="${event.params.site}-${sheet.version}.pdf"`,
			'cache-control': 'private, no-store'
		}
	});
};
