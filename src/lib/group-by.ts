/** Rows by a key, keys in the order of their first row (`Map.groupBy`, which Node.js 20 lacks). */
export function groupBy<Row, Key>(rows: readonly Row[], keyOf: (row: Row) => Key): [Key, Row[]][] {
	const groups = new Map<Key, Row[]>();
	for (const row of rows) {
		const key = keyOf(row);
		const group = groups.get(key);
		if (group) group.push(row);
		else groups.set(key, [row]);
	}
	return [...groups];
}
