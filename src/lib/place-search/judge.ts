import { Sight } from '../optics/sight';
import { createCurtain, type Site, type Zone } from '../optics/site';
import { curtainAt, type PlaceQuestion, type Placement } from './question';
import type { SeasonSky, SunPart } from './season-sky';

/** What the other curtains show under one sun, whatever the sought one does. */
interface Shown {
	/** Arc of each eye in degrees; null when none of them sees anything. */
	readonly arcsDeg: Float32Array | null;
	/** The share reaches the rule with the others alone. */
	readonly open: boolean;
}

/** Arcs that are kept have seven digits, degrees. */
const KEPT_ROUNDING_DEG = 1e-3;

/**
 * Judges placements of a curtain by the season's sun: how many sellable minutes the zone is open to the
 * bow. That hangs on the sun's direction alone, so the season is laid into parts of the sky once (see
 * seasonSky), and a placement sums up the minutes of those under whose mean sun the share reaches the rule.
 *
 * An eye is asked as the engine asks it (see Sight). Two things are spared: what the other curtains show
 * never changes from one placement to the next and is kept, and the eyes are asked in the order that
 * settled the part before, until enough have the bow or too many have it not.
 */
export class Judge {
	/** How many eyes were asked so far: what a bench holds against the least. */
	eyesAsked = 0;
	/** The least number of eyes that could have settled the same parts, one by one. */
	eyesNeeded = 0;

	private readonly question: PlaceQuestion;
	private readonly zone: Zone;
	private readonly site: Site;
	private readonly sky: SeasonSky;
	private readonly others: Site['curtains'];
	private readonly othersSight: Sight | null;
	private readonly shownBy = new Map<number, Shown>();
	/** 1 for each eye that had the bow when it was last asked. */
	private readonly had: Uint8Array;
	/** The eye's turn to be asked under the present sun is over. */
	private readonly asked: Uint8Array;
	private wasOpen = false;
	private readonly openParts: Uint8Array;

	private own!: Sight;
	private together: Sight | null = null;
	private placed!: Site['curtains'][number];

	/**
	 * @param site of the question's plan
	 * @param sky of the question's season at that site
	 * @throws RangeError when the plan has no such zone
	 */
	constructor(question: PlaceQuestion, site: Site, sky: SeasonSky) {
		const zone = site.zones[question.zoneIndex];
		if (!zone) throw new RangeError(`the plan has no zone ${question.zoneIndex + 1}`);
		this.question = question;
		this.zone = zone;
		this.site = site;
		this.sky = sky;
		this.others = site.curtains.filter(({ enabled }, i) => enabled && i !== question.replaces);
		this.othersSight = this.others.length > 0 ? this.sightOf(this.others) : null;
		this.had = new Uint8Array(zone.eyes.length);
		this.asked = new Uint8Array(zone.eyes.length);
		this.openParts = new Uint8Array(sky.parts.length);
	}

	/** Sellable minutes of a placement by the large parts of the sky: quick, for a whole field. */
	coarseMinutes(placement: Placement): number {
		this.place(placement);
		let sum = 0;
		for (const part of this.sky.parts) if (this.isOpen(part)) sum += part.minutes;
		return sum;
	}

	/**
	 * Sellable minutes of a placement, with every large part of the sky whose neighbours say otherwise looked
	 * at in its small parts.
	 */
	fineMinutes(placement: Placement): number {
		this.place(placement);
		const { parts, neighbours, smaller } = this.sky;
		const { openParts } = this;
		for (let i = 0; i < parts.length; i++) openParts[i] = this.isOpen(parts[i]!) ? 1 : 0;
		let sum = 0;
		for (let i = 0; i < parts.length; i++) {
			const open = openParts[i]!;
			if (neighbours[i]!.every((n) => openParts[n] === open)) {
				if (open) sum += parts[i]!.minutes;
			} else {
				for (const part of smaller[i]!) if (this.isOpen(part)) sum += part.minutes;
			}
		}
		return sum;
	}

	private place(placement: Placement): void {
		this.placed = createCurtain(curtainAt(this.question, placement), 'sought');
		this.own = this.sightOf([this.placed]);
		this.together = null;
	}

	/** Whether the zone is open under the mean sun of a part, with the curtain as it was last placed. */
	private isOpen(part: SunPart): boolean {
		const shown = this.shown(part);
		if (shown?.open) return true;
		this.own.setSun(part.frame);
		let togetherIsSet = false;
		const { had, asked, zone, own } = this;
		const { minimumArcDeg } = this.site;
		const others = shown?.arcsDeg ?? null;
		const count = zone.eyes.length;
		let wanted = zone.leastEyes;
		let spare = count - wanted;
		asked.fill(0);
		// Those that were as the whole was come first: they are most likely to settle it again.
		for (let turn = 0; turn < 2; turn++) {
			const was = (turn === 0) === this.wasOpen ? 1 : 0;
			for (let e = 0; e < count; e++) {
				if (asked[e] === 1 || had[e] !== was) continue;
				asked[e] = 1;
				this.eyesAsked++;
				const besides = others === null ? 0 : others[e]!;
				let arcDeg = besides >= minimumArcDeg + KEPT_ROUNDING_DEG ? besides : own.arcDeg(e);
				// Two arcs may overlap: their sum settles it only where it is too little.
				if (
					besides > 0 &&
					arcDeg < minimumArcDeg &&
					arcDeg + besides + KEPT_ROUNDING_DEG >= minimumArcDeg
				) {
					this.together ??= this.sightOf([...this.others, this.placed]);
					if (!togetherIsSet) this.together.setSun(part.frame);
					togetherIsSet = true;
					arcDeg = this.together.arcDeg(e);
				}
				if (arcDeg >= minimumArcDeg) {
					had[e] = 1;
					if (--wanted <= 0) return this.settled(true);
				} else {
					had[e] = 0;
					if (--spare < 0) return this.settled(false);
				}
			}
		}
		return this.settled(wanted <= 0);
	}

	private settled(open: boolean): boolean {
		this.wasOpen = open;
		const { leastEyes, eyes } = this.zone;
		this.eyesNeeded += open ? leastEyes : eyes.length - leastEyes + 1;
		return open;
	}

	private sightOf(curtains: Site['curtains']): Sight {
		return new Sight({ curtains, walls: this.site.walls }, this.zone.eyes);
	}

	private shown(part: SunPart): Shown | null {
		const sight = this.othersSight;
		if (!sight) return null;
		const known = this.shownBy.get(part.id);
		if (known) return known;
		sight.setSun(part.frame);
		const { leastEyes, eyes } = this.zone;
		let have = 0;
		let some = false;
		const arcsDeg = Float32Array.from(eyes, (_, e) => {
			const arcDeg = sight.arcDeg(e);
			if (arcDeg >= this.site.minimumArcDeg) have++;
			if (arcDeg > 0) some = true;
			return arcDeg;
		});
		const found = { arcsDeg: some ? arcsDeg : null, open: have >= leastEyes };
		this.shownBy.set(part.id, found);
		return found;
	}
}
