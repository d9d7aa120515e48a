import { superForm, type SuperValidated } from 'sveltekit-superforms';

/** What a form says above its fields once it was sent. */
export interface FormMessage {
	kind: 'done' | 'refused';
	text: string;
}

/**
 * The one way a page uses a form: it works by itself without script, and with script keeps what was
 * typed and shows the server's answer in place.
 * @param clearWhenDone empties the fields after success, for forms that add one thing after another
 */
export function useForm<T extends Record<string, unknown>>(
	data: SuperValidated<T, FormMessage>,
	{ clearWhenDone = false } = {}
) {
	const form = superForm<T, FormMessage>(data, {
		resetForm: clearWhenDone,
		taintedMessage: null,
		onError({ result }) {
			form.message.set({ kind: 'refused', text: result.error.message });
		}
	});
	return form;
}
