import { describe, expect, it } from 'vitest';
import { inTenant } from '$lib/server/db/transaction';
import { slot } from '$lib/server/db/schema';
import { makeDemo } from '$lib/server/demo/make';

describe('the demo', () => {
	it('is made by the services', async () => {
		const now = new Date();
		console.time('demo');
		const { operatorId } = await makeDemo(now);
		console.timeEnd('demo');
		const slots = await inTenant(operatorId, { actor: { kind: 'worker', name: 'test' } }, (tx) =>
			tx.sql.select().from(slot)
		);
		expect(slots.length).toBeGreaterThan(40);
		expect(slots.reduce((sum, one) => sum + one.sold, 0)).toBeGreaterThan(10);
		expect(slots.filter((one) => one.status === 'called_off')).toHaveLength(1);
	});
});
