/** A refund policy as a sentence. */
export function refundWords({
	untilHoursBefore,
	percent
}: {
	untilHoursBefore: number;
	percent: number;
}): string {
	if (percent === 0) return 'Once paid, an order can not be given back.';
	const part = percent === 100 ? 'All' : `${percent} %`;
	if (untilHoursBefore === 0)
		return `${part} of the price goes back if you cancel before it begins.`;
	return `${part} of the price goes back if you cancel at least ${untilHoursBefore} hours before.`;
}
