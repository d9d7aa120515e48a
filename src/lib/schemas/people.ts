import { z } from 'zod';

/** Shapes that forms and the server share for people and members. Messages say what to do. */

export const emailField = z
	.string()
	.trim()
	.toLowerCase()
	.max(254, 'An address has at most 254 characters.')
	.refine((value) => z.email().safeParse(value).success, {
		message: 'Give an e-mail address such as name@example.org.'
	});

export const passwordField = z
	.string()
	.min(12, 'Use at least 12 characters.')
	.max(200, 'Use at most 200 characters.');

const nameField = (what: string) =>
	z
		.string()
		.trim()
		.min(1, `Give ${what}.`)
		.max(100, 'Use at most 100 characters.')
		// A name ends up in letters: line breaks and control signs have no place in it.
		.regex(/^[^\p{Cc}]*$/u, 'Use letters, digits and signs on one line.');

const codeField = z
	.string()
	.trim()
	.transform((value) => value.replaceAll(/[\s-]/g, ''))
	.refine((value) => /^(\d{6}|[A-Za-z2-7]{16})$/.test(value), {
		message: 'Give the 6 digits from your app, or a recovery code.'
	});

export const signInSchema = z.object({
	email: emailField,
	password: z.string().min(1, 'Give your password.').max(200, 'That is too long for a password.')
});

export const signUpSchema = z.object({
	operatorName: nameField('the name of your organisation'),
	name: nameField('your name'),
	email: emailField,
	password: passwordField
});

export const secondStepSchema = z.object({ code: codeField });

export const forgottenSchema = z.object({ email: emailField });

export const newPasswordSchema = z.object({ password: passwordField });

export const changePasswordSchema = z.object({
	current: z.string().min(1, 'Give your present password.').max(200, 'That is too long.'),
	password: passwordField
});

export const changeAddressSchema = z.object({
	current: z.string().min(1, 'Give your password.').max(200, 'That is too long.'),
	email: emailField
});

export const startSecondStepSchema = z.object({
	secret: z.string().regex(/^[A-Z2-7]{32}$/, 'Load the page again for a new key.'),
	code: z
		.string()
		.trim()
		.regex(/^\d{6}$/, 'Give the 6 digits that your app shows.')
});

export const confirmPasswordSchema = z.object({
	current: z.string().min(1, 'Give your password.').max(200, 'That is too long.')
});

export const roleNames = {
	owner: 'owner',
	planner: 'planner',
	box_office: 'box office',
	steward: 'steward',
	bookkeeper: 'bookkeeper'
} as const;

export const roleField = z.enum(
	Object.keys(roleNames) as [keyof typeof roleNames, ...(keyof typeof roleNames)[]],
	'Choose a role.'
);

export const inviteSchema = z.object({ email: emailField, role: roleField });

export const memberRoleSchema = z.object({ memberId: z.uuid(), role: roleField });

export const memberIdSchema = z.object({ memberId: z.uuid() });

export const invitationIdSchema = z.object({ invitationId: z.uuid() });

export const sessionHashSchema = z.object({ hash: z.string().min(20).max(64) });

export const emptySchema = z.object({});

export const operatorSettingsSchema = z.object({
	name: nameField('the name of your organisation'),
	requireSecondStep: z.boolean()
});

export const newOperatorSchema = z.object({
	operatorName: nameField('the name of your organisation')
});

/** Accepting an invitation as somebody who has no account yet. */
export const joinSchema = z.object({ name: nameField('your name'), password: passwordField });

export const suspendSchema = z.object({
	operatorId: z.uuid(),
	reason: z
		.string()
		.trim()
		.min(3, 'Say why, in a few words.')
		.max(300, 'Use at most 300 characters.')
});

export const operatorIdSchema = z.object({ operatorId: z.uuid() });

export const jobIdSchema = z.object({ jobId: z.string().regex(/^\d{1,18}$/, 'No such job.') });
