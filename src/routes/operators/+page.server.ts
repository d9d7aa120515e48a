import { redirect } from '@sveltejs/kit';
import { newOperatorSchema } from '$lib/schemas/people';
import { demandPerson, emptyForm, handleForm, inAccount } from '$lib/server/http';
import { listMemberships, openOperator } from '$lib/server/operators/operators';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { userId } = demandPerson(event);
	return {
		form: await emptyForm(newOperatorSchema),
		memberships: await inAccount(event, (tx) => listMemberships(tx, userId))
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, newOperatorSchema, async ({ operatorName }) => {
			const person = demandPerson(event);
			const { slug } = await openOperator(person, operatorName, person.requestId);
			redirect(303, `/desk/${slug}`);
		})
};
