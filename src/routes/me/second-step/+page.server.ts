import { error } from '@sveltejs/kit';
import QRCode from 'qrcode';
import { confirmPasswordSchema, startSecondStepSchema } from '$lib/schemas/people';
import { demandPassword } from '$lib/server/auth/account';
import {
	newSecondStepSecret,
	recoveryCodesLeft,
	secondStepUri,
	startSecondStep,
	stopSecondStep
} from '$lib/server/auth/second-step';
import { demandPerson, emptyForm, handleForm, inAccount, setCookie } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	const person = demandPerson(event);
	const since = event.locals.user?.secondStepSince ?? null;
	const stopForm = await emptyForm(confirmPasswordSchema, {}, 'stop');
	const wantedBy = event.url.searchParams.get('for');
	if (since) {
		const codesLeft = await inAccount(event, (tx) => recoveryCodesLeft(tx, person.userId));
		return { since, codesLeft, stopForm, wantedBy, setUp: null };
	}
	const { secret, uri } = newSecondStepSecret(person.email);
	return {
		since,
		codesLeft: 0,
		stopForm,
		wantedBy,
		setUp: {
			form: await emptyForm(startSecondStepSchema, { secret, code: '' }, 'start'),
			picture: await QRCode.toDataURL(uri, { margin: 2, width: 220 })
		}
	};
};

export const actions: Actions = {
	start: async (event) => {
		const person = demandPerson(event);
		let recoveryCodes: string[] = [];
		let secret = '';
		const answer = await handleForm(event, startSecondStepSchema, async (data) => {
			secret = data.secret;
			const started = await inAccount(event, (tx) => startSecondStep(tx, person, data));
			setCookie(event.cookies, started.cookie);
			recoveryCodes = started.recoveryCodes;
			return 'The second step is on.';
		});
		if ('status' in answer) {
			// The key that was scanned stays the one on the page.
			const picture = secret
				? await QRCode.toDataURL(secondStepUri(secret, person.email), { margin: 2, width: 220 })
				: null;
			Object.assign(answer.data, { picture });
			return answer;
		}
		return { ...answer, recoveryCodes };
	},
	stop: (event) =>
		handleForm(event, confirmPasswordSchema, async ({ current }) => {
			const person = demandPerson(event);
			if (!event.locals.user?.secondStepSince) error(409, 'The second step is off already.');
			await demandPassword(person, current);
			await inAccount(event, (tx) => stopSecondStep(tx, person.userId));
			return 'The second step is off.';
		})
};
