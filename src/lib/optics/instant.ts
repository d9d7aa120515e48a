import { requireWithin } from './angles';
import { ringFrame } from './ring';
import { Sight } from './sight';
import type { Site, Zone } from './site';
import { sunPosition, type SunPosition } from './sun';

/** What one eye sees. */
export interface EyeState {
	readonly x: number;
	readonly y: number;
	readonly z: number;
	/** Degrees of the ring seen in any enabled curtain, 0 to 360. */
	readonly arcDeg: number;
}

/** A zone at one instant. */
export interface ZoneState {
	readonly zone: string;
	/** Fraction of the eyes that have the bow, 0 to 1: geometry alone, whatever the sun's altitude. */
	readonly share: number;
	/** The whole rule: altitude, skyline and share. */
	readonly open: boolean;
	readonly eyes: readonly EyeState[];
}

/** A site at one instant. */
export interface SiteState {
	readonly sun: SunPosition;
	readonly zones: readonly ZoneState[];
	/** All curtains, disabled ones too, with the reference radius of their bow in degrees. */
	readonly curtains: readonly { readonly curtain: string; readonly radiusDeg: number }[];
}

/** Whether the sun is at or above the rule's altitude and above the skyline. */
export function sunIsUp(site: Site, { azimuthDeg, altitudeDeg }: SunPosition): boolean {
	return (
		altitudeDeg >= site.minimumSunAltitudeDeg &&
		altitudeDeg > site.horizon.altitudeDegAt(azimuthDeg)
	);
}

/** Sights are costly to make beside a single look, and a site never changes. */
const sights = new WeakMap<Zone, Sight>();

/** The sight of a zone's eyes. It holds the last sun it was set to: set it before every use. */
export function sightOf(site: Site, zone: Zone): Sight {
	let sight = sights.get(zone);
	if (!sight) {
		sight = new Sight(site, zone.eyes);
		sights.set(zone, sight);
	}
	return sight;
}

/**
 * The state of a site under a given sun: the arc of every eye, each zone's share, and whether it is open.
 * @param sun azimuth in degrees, altitude -90 to 90 degrees
 * @throws RangeError when the sun's position is out of range
 */
export function stateUnderSun(site: Site, sun: SunPosition): SiteState {
	requireWithin('azimuthDeg', sun.azimuthDeg, { least: -360, greatest: 720 });
	const frame = ringFrame(sun);
	const up = sunIsUp(site, sun);
	return {
		sun,
		zones: site.zones.map((zone) => {
			const sight = sightOf(site, zone);
			sight.setSun(frame);
			let have = 0;
			const eyes = zone.eyes.map((eye, e) => {
				const arcDeg = sight.arcDeg(e);
				if (arcDeg >= site.minimumArcDeg) have++;
				return { x: eye.x, y: eye.y, z: eye.z, arcDeg };
			});
			const share = have / eyes.length;
			return { zone: zone.name, share, open: up && share >= site.minimumShare, eyes };
		}),
		curtains: site.curtains.map(({ name, radiusDeg }) => ({ curtain: name, radiusDeg }))
	};
}

/**
 * The state of a site at an instant.
 * @param instantMs milliseconds since 1970 UTC
 * @throws RangeError when the instant is not a finite one
 */
export function stateAt(site: Site, instantMs: number): SiteState {
	return stateUnderSun(site, sunPosition({ instantMs, ...site }));
}
