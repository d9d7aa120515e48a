import { newOperatorSchema, operatorIdSchema, suspendSchema } from '$lib/schemas/people';
import { demandPerson, emptyForm, handleForm, inAdministration } from '$lib/server/http';
import { listOperators, openOperator, setOperatorStatus } from '$lib/server/operators/operators';
import type { Actions, PageServerLoad } from './$types';

const most = 50;

export const load: PageServerLoad = async (event) => {
	const search = (event.url.searchParams.get('search') ?? '').slice(0, 100);
	const pageNumber = Math.max(1, Math.trunc(Number(event.url.searchParams.get('page')) || 1));
	const list = await inAdministration(event, (tx) =>
		listOperators(tx, { search, most, skip: (pageNumber - 1) * most })
	);
	return {
		...list,
		search,
		pageNumber,
		pages: Math.max(1, Math.ceil(list.total / most)),
		openForm: await emptyForm(newOperatorSchema, {}, 'open'),
		rowForm: await emptyForm(suspendSchema, {}, 'row')
	};
};

export const actions: Actions = {
	open: (event) =>
		handleForm(event, newOperatorSchema, async ({ operatorName }) => {
			const person = demandPerson(event);
			await inAdministration(event, async () => {});
			const { slug } = await openOperator(person, operatorName, person.requestId);
			return `${operatorName} is open at /desk/${slug}. You are its owner: invite one and leave.`;
		}),
	suspend: (event) =>
		handleForm(event, suspendSchema, async ({ operatorId, reason }) => {
			await inAdministration(event, (tx) => setOperatorStatus(tx, operatorId, reason));
			return 'The operator is suspended: its members and visitors see a closed page.';
		}),
	reopen: (event) =>
		handleForm(event, operatorIdSchema, async ({ operatorId }) => {
			await inAdministration(event, (tx) => setOperatorStatus(tx, operatorId, null));
			return 'The operator is open again.';
		})
};
