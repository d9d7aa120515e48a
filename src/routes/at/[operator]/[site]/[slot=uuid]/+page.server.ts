import { error, redirect } from '@sveltejs/kit';
import { v7 as uuidv7 } from 'uuid';
import { bowStrip } from '$lib/bow-strip';
import { reserveSchema } from '$lib/schemas/order';
import {
	AlreadyReserved,
	holdMinutes,
	mostPlaces,
	reservePlaces
} from '$lib/server/booking/reserve';
import { settleFreeOrder } from '$lib/server/booking/settle';
import {
	findOpenSite,
	findSlot,
	listPrices,
	placesLeft,
	readRefundPolicy
} from '$lib/server/booking/slots-for-sale';
import { isVisitorKey, visitorKey, visitorPath } from '$lib/server/booking/visitor-key';
import { countAttempt } from '$lib/server/auth/limits';
import { inTenant } from '$lib/server/db/transaction';
import { Refusal } from '$lib/server/failures';
import { emptyForm, handleForm } from '$lib/server/http';
import { asVisitor, publicOperator, visitorOrigin } from '$lib/server/visitor';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async (event) =>
	asVisitor(event, async (tx, operator) => {
		const site = await findOpenSite(tx, event.params.site);
		const slot = site ? await findSlot(tx, event.params.slot) : null;
		if (!site || !slot || slot.siteId !== site.id) error(404, 'There is nothing at this address.');
		const prices = await listPrices(tx, slot.programmeId);
		const orderId = uuidv7();
		const left = placesLeft(slot);
		return {
			site: {
				slug: site.slug,
				name: site.name,
				timeZone: site.timeZone,
				currency: site.currency
			},
			slot: {
				zone: slot.zone,
				localDate: slot.localDate,
				startsAt: slot.startsAt,
				endsAt: slot.endsAt,
				arcDeg: slot.arcDeg,
				lookAzimuthDeg: slot.lookAzimuthDeg,
				sunAltitudeDeg: slot.sunAltitudeDeg,
				placesLeft: left,
				forSale: slot.status === 'open' && slot.startsAt > new Date() && left > 0,
				calledOff: slot.status === 'called_off'
			},
			strip: bowStrip(slot.dropDiameterUm),
			prices,
			policy: await readRefundPolicy(tx, slot.programmeId),
			holdMinutes,
			most: Math.min(left, mostPlaces),
			form: await emptyForm(reserveSchema, {
				orderId,
				key: visitorKey(operator.id, orderId),
				priceCategoryId: prices.map(({ id }) => id),
				quantity: prices.map(() => '0'),
				visitorName: '',
				visitorEmail: ''
			})
		};
	});

export const actions: Actions = {
	default: (event) =>
		handleForm(event, reserveSchema, async (data) => {
			const operator = await publicOperator(event);
			// The name of the order was given by this page: nobody reaches another's order through it.
			if (!isVisitorKey(operator.id, data.orderId, data.key)) {
				throw new Refusal('invalid', 'This form is not usable any more. Open the page again.');
			}
			await countAttempt('reserveAddress', event.getClientAddress());
			const quantities = data.priceCategoryId.map((priceCategoryId, i) => ({
				priceCategoryId,
				quantity: Number(data.quantity[i] ?? 0)
			}));
			const now = new Date();
			try {
				await inTenant(operator.id, visitorOrigin(event), async (tx) => {
					await reservePlaces(tx, { ...data, slotId: event.params.slot, quantities }, now);
					await settleFreeOrder(tx, data.orderId, now);
				});
			} catch (thrown) {
				// Sent twice: the first one stands, and this leads to it.
				if (!(thrown instanceof AlreadyReserved)) throw thrown;
			}
			redirect(303, visitorPath(operator, data.orderId));
		})
};
