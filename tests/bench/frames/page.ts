import { mount } from 'svelte';
import '../../../src/app.css';
import PlanTable from '$lib/components/plan-table/PlanTable.svelte';
import YearDesk from '$lib/components/year-sheet/YearDesk.svelte';
import type { Plan } from '$lib/schemas/plan';

/** What the bench gives the page before it is opened. */
declare global {
	interface Window {
		shown: { what: 'table' | 'year' | 'nothing'; plan: Plan };
	}
}

const { what, plan } = window.shown;
const target = document.getElementById('content')!;
if (what === 'table') {
	mount(PlanTable, {
		target,
		props: {
			plan,
			version: 1,
			revision: 1,
			everLive: false,
			mayWrite: true,
			date: '2027-03-18',
			justSaved: false
		}
	});
} else if (what === 'year') {
	mount(YearDesk, {
		target,
		props: {
			site: { name: plan.name ?? '' },
			plans: [{ version: 1, state: 'live', body: plan }],
			programmes: [],
			today: '2027-03-18',
			start: { version: 1, zone: null, day: null, programme: null },
			tableHref: () => '#',
			onaddress: () => undefined
		}
	});
}
