import { changeAddressSchema, changePasswordSchema } from '$lib/schemas/people';
import { changePassword, requestNewAddress } from '$lib/server/auth/account';
import { demandPerson, emptyForm, handleForm, setCookie } from '$lib/server/http';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => {
	demandPerson(event);
	return {
		passwordForm: await emptyForm(changePasswordSchema, {}, 'password'),
		addressForm: await emptyForm(changeAddressSchema, {}, 'address')
	};
};

export const actions: Actions = {
	password: (event) =>
		handleForm(event, changePasswordSchema, async (data) => {
			setCookie(event.cookies, await changePassword(demandPerson(event), data));
			return 'The password is changed. Other sessions have ended.';
		}),
	address: (event) =>
		handleForm(event, changeAddressSchema, async (data) => {
			await requestNewAddress(demandPerson(event), data);
			return `A letter is on its way to ${data.email}. The address changes once the link in it is opened.`;
		})
};
