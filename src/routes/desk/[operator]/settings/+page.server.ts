import { operatorSettingsSchema } from '$lib/schemas/people';
import { demand } from '$lib/server/auth/rights';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import { changeOperator, readOperator } from '$lib/server/operators/operators';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const { name, requireSecondStep } = await orError(
		inDesk(event, (tx) => {
			demand(tx, 'operator.settings');
			return readOperator(tx);
		})
	);
	return {
		form: await emptyForm(operatorSettingsSchema, { name, requireSecondStep }),
		ownSecondStep: event.locals.user?.secondStepSince !== null
	};
};

export const actions: Actions = {
	default: (event) =>
		handleForm(event, operatorSettingsSchema, async (data) => {
			await inDesk(event, (tx) => changeOperator(tx, data));
			return 'The settings are saved.';
		})
};
