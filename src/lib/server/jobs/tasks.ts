import type { JobHelpers } from 'graphile-worker';
import { deleteExpired } from '../auth/housekeeping';
import { moveSlotOrder } from '../booking/move-slot';
import { endHold } from '../booking/settle';
import { sendLetter } from '../mail/send';
import { handlePaymentEvent } from '../payments/events';
import { syncLedger } from '../payments/ledger';
import { sendAskedRefund } from '../payments/refunds';
import { computeWindows } from '../sites/compute';
import { remindOfWater } from '../sites/water';
import { callOffOrder } from '../weather/call-off';
import { readForecast, readForecasts } from '../weather/watch';

/** What each kind of job carries. */
export interface TaskPayloads {
	send_letter: { letterId: string; operatorId: string | null };
	delete_expired: Record<string, never>;
	handle_payment_event: { operatorId: string; paymentEventId: string };
	sync_ledger: { operatorId: string };
	send_refund: { operatorId: string; refundId: string };
	end_hold: { operatorId: string; orderId: string };
	call_off_order: { operatorId: string; orderId: string; weatherCallId: string };
	move_slot_order: { operatorId: string; orderId: string; slotMoveId: string };
	compute_windows: { operatorId: string; computationId: string };
	read_forecast: { operatorId: string; siteId: string };
	read_forecasts: Record<string, never>;
	remind_of_water: Record<string, never>;
}

/** How often a job was tried, this time included, and how often it may be. */
export interface Attempt {
	number: number;
	of: number;
}

type Handler<Payload> = (payload: Payload, attempt: Attempt) => Promise<void>;

/** The work behind each kind of job. Every handler may be run again after a crash in its middle. */
export const handlers: { [Task in keyof TaskPayloads]: Handler<TaskPayloads[Task]> } = {
	send_letter: sendLetter,
	delete_expired: deleteExpired,
	handle_payment_event: handlePaymentEvent,
	sync_ledger: syncLedger,
	send_refund: sendAskedRefund,
	end_hold: endHold,
	call_off_order: callOffOrder,
	move_slot_order: moveSlotOrder,
	compute_windows: computeWindows,
	read_forecast: readForecast,
	read_forecasts: readForecasts,
	remind_of_water: remindOfWater
};

/** The attempt that graphile-worker's helpers speak of. */
export function attemptOf(helpers: JobHelpers): Attempt {
	return { number: helpers.job.attempts, of: helpers.job.max_attempts };
}
