/** The menu of an operator's desk: entries and the right that each asks for. */
const entries: { path: string; label: string; right: string | null }[] = [
	{ path: '', label: 'Today', right: null },
	{ path: '/gate', label: 'Gate', right: 'gate.use' },
	{ path: '/slots', label: 'Slots', right: 'orders.read' },
	{ path: '/orders', label: 'Orders', right: 'orders.read' },
	{ path: '/weather', label: 'Weather', right: 'weather.decide' },
	{ path: '/sites', label: 'Sites', right: 'sites.write' },
	{ path: '/money', label: 'Money', right: 'money.read' },
	{ path: '/members', label: 'Members', right: 'members.manage' },
	{ path: '/letters', label: 'Letters', right: 'letters.read' },
	{ path: '/trail', label: 'Trail', right: 'trail.read' },
	{ path: '/settings', label: 'Settings', right: 'operator.settings' }
];

/** The entries that somebody with these rights can use. */
export function deskMenu(home: string, rights: string[]): { href: string; label: string }[] {
	return entries
		.filter((entry) => entry.right === null || rights.includes(entry.right))
		.map((entry) => ({ href: home + entry.path, label: entry.label }));
}
