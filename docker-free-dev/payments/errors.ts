import type Stripe from 'stripe';

/** The documented error object, as it stands under `error` in an answer. */
export interface ErrorBody {
	type: 'api_error' | 'card_error' | 'idempotency_error' | 'invalid_request_error';
	message: string;
	code?: string;
	decline_code?: string;
	param?: string;
	charge?: string;
	payment_intent?: Stripe.PaymentIntent;
	request_log_url?: string;
}

/** An answer that is an error: thrown by handlers, written by the server. */
export class ApiError extends Error {
	readonly status: number;
	readonly body: ErrorBody;

	constructor(status: number, body: ErrorBody) {
		super(body.message);
		this.status = status;
		this.body = body;
	}
}

/** A fault of the request: 400 unless told otherwise. */
export function invalid(
	message: string,
	more: { param?: string; code?: string; status?: number } = {}
): ApiError {
	const { status = 400, ...rest } = more;
	return new ApiError(status, { type: 'invalid_request_error', message, ...rest });
}

/** There is no such object, or it belongs to another account. */
export function missingResource(object: string, id: string, param: string): ApiError {
	return invalid(`No such ${object}: '${id}'`, { param, code: 'resource_missing', status: 404 });
}

/** A required parameter is not there. */
export function missingParameter(param: string): ApiError {
	return invalid(`Missing required param: ${param}.`, { param, code: 'parameter_missing' });
}
