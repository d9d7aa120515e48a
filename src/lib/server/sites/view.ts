import { createSite, seenArcs, stateAt, sunPosition, type Eye } from '../../optics';
import type { Plan } from '../../schemas/plan';

/** What is seen from a zone in the middle of a slot. */
export interface SlotView {
	/** Median arc of the eyes that have the bow, degrees; 0 when none has it at that moment. */
	arcDeg: number;
	share: number;
	sunAltitudeDeg: number;
	/** Where to look: opposite the sun. */
	lookAzimuthDeg: number;
	/** Drop size of the curtain that shows most of the bow. */
	dropDiameterUm: number;
}

export type ViewAt = (zone: string, slot: { startsAt: Date; endsAt: Date }) => SlotView;

/** A look at any zone of a plan at any slot's middle. */
export function viewFrom(plan: Plan): ViewAt {
	const site = createSite(plan);
	return (zoneName, { startsAt, endsAt }) => {
		const middleMs = (startsAt.getTime() + endsAt.getTime()) / 2;
		const state = stateAt(site, middleMs);
		const zone = state.zones.find(({ zone: name }) => name === zoneName);
		if (!zone) throw new Error(`the plan has no zone ${zoneName}`);
		const having = zone.eyes.filter(({ arcDeg }) => arcDeg >= site.minimumArcDeg);
		const best = zone.eyes.reduce((a, b) => (b.arcDeg > a.arcDeg ? b : a));
		return {
			arcDeg: median(having.map(({ arcDeg }) => arcDeg)),
			share: zone.share,
			sunAltitudeDeg: state.sun.altitudeDeg,
			lookAzimuthDeg: (state.sun.azimuthDeg + 180) % 360,
			dropDiameterUm: mainDropDiameter(plan, site, best, middleMs)
		};
	};
}

function mainDropDiameter(
	plan: Plan,
	site: ReturnType<typeof createSite>,
	eye: Eye,
	instantMs: number
): number {
	const lengths = plan.curtains.map(() => 0);
	for (const arc of seenArcs({ site, eye, sun: sunPosition({ instantMs, ...site }) })) {
		lengths[arc.curtainIndex]! += arc.endDeg - arc.startDeg;
	}
	const most = lengths.indexOf(Math.max(...lengths));
	return plan.curtains[most]?.dropDiameter ?? 0;
}

function median(values: number[]): number {
	if (values.length === 0) return 0;
	const sorted = [...values].sort((a, b) => a - b);
	const middle = sorted.length / 2;
	return sorted.length % 2 === 1
		? sorted[Math.floor(middle)]!
		: (sorted[middle - 1]! + sorted[middle]!) / 2;
}
