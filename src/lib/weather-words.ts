/** What the weather watch suggests, in words, each with its colour class. */
export const suggestionWords = {
	go: { label: 'goes', colour: 'text-good' },
	wait: { label: 'wait', colour: 'text-caution' },
	call_off: { label: 'in doubt', colour: 'text-stop' }
} as const;
