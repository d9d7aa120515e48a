import { redirect } from '@sveltejs/kit';
import {
	emptySchema,
	invitationIdSchema,
	inviteSchema,
	memberIdSchema,
	memberRoleSchema
} from '$lib/schemas/people';
import { emptyForm, handleForm, inDesk, orError } from '$lib/server/http';
import {
	changeRole,
	invite,
	leaveOperator,
	listInvitations,
	listMembers,
	removeMember,
	withdrawInvitation
} from '$lib/server/operators/members';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) => ({
	...(await orError(
		inDesk(event, async (tx) => ({
			members: await listMembers(tx),
			invitations: await listInvitations(tx)
		}))
	)),
	me: event.locals.user?.id,
	inviteForm: await emptyForm(inviteSchema, { role: 'planner' }, 'invite'),
	rowForm: await emptyForm(memberIdSchema, {}, 'row')
});

export const actions: Actions = {
	invite: (event) =>
		handleForm(event, inviteSchema, async (data) => {
			await inDesk(event, (tx) => invite(tx, data));
			return `A letter is on its way to ${data.email}.`;
		}),
	role: (event) =>
		handleForm(event, memberRoleSchema, async (data) => {
			await inDesk(event, (tx) => changeRole(tx, data));
			return 'The role is changed.';
		}),
	remove: (event) =>
		handleForm(event, memberIdSchema, async ({ memberId }) => {
			await inDesk(event, (tx) => removeMember(tx, memberId));
			return 'The member is removed.';
		}),
	withdraw: (event) =>
		handleForm(event, invitationIdSchema, async ({ invitationId }) => {
			await inDesk(event, (tx) => withdrawInvitation(tx, invitationId));
			return 'The invitation is withdrawn.';
		}),
	leave: (event) =>
		handleForm(event, emptySchema, async () => {
			await inDesk(event, (tx) => leaveOperator(tx));
			redirect(303, '/operators');
		})
};
