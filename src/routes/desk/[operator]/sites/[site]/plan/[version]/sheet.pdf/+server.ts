import { inDesk, orError } from '$lib/server/http';
import { readOperator } from '$lib/server/operators/operators';
import { newestComputation, readWindows } from '$lib/server/sites/compute';
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
			const computed = await newestComputation(tx, plan.id);
			const range = computed && { from: computed.fromDate, to: computed.toDate };
			return {
				operator: (await readOperator(tx)).name,
				site: site.name,
				version: plan.version,
				state: plan.state,
				changedAt: plan.changedAt,
				plan: plan.body,
				season:
					computed && range
						? { ...range, windows: await readWindows(tx, computed.id, range) }
						: null
			};
		})
	);
	return new Response(new Uint8Array(await sheetPdf(sheet)), {
		headers: {
			'content-type': 'application/pdf',
			'content-disposition': `inline; filename="${event.params.site}-${sheet.version}.pdf"`,
			'cache-control': 'private, no-store'
		}
	});
};
