/**
 * Unions of intervals on the ring, exact and free of trigonometry while they are being cut.
 *
 * A place on the ring is carried as a pseudo-angle p in [-2, 2] that grows with phi: for the unit
 * vector (c, s) = (cos phi, sin phi) it is s / (|c| + |s|) on the upper half of the ring (c >= 0) and
 * its continuation on the lower. p = 0 is the top of the ring, p = -2 and p = 2 are its lowest place,
 * where the cut between the two ends of the range lies. A bow is mostly seen about its top, so mostly
 * it is one interval.
 *
 * A set of n intervals is the first 2n numbers of a Float64Array: start, end, start, end, ascending and
 * disjoint. Functions return the new n. The arrays belong to the caller, so nothing is allocated here.
 */

/** Lowest place of the ring, at either end of the range. */
export const RING_START = -2;
export const RING_END = 2;

const QUARTER_PI = Math.PI / 4;

/** The pseudo-angle of a vector of any length above 0. */
function pseudoAngle(c: number, s: number): number {
	const p = s / (Math.abs(c) + Math.abs(s));
	if (c >= 0) return p;
	return s >= 0 ? 2 - p : -2 - p;
}

/**
 * The angle phi in radians, -pi to pi, of a pseudo-angle. For p from 0 to 1 it is the angle of the vector
 * (1 - p, p), that is pi/4 + atan(2 p - 1); from 1 to 2 the mirror image of that.
 */
export function angleOfPseudo(p: number): number {
	const size = p < 0 ? -p : p;
	const angle =
		size <= 1 ? QUARTER_PI + Math.atan(2 * size - 1) : 3 * QUARTER_PI + Math.atan(2 * size - 3);
	return p < 0 ? -angle : angle;
}

/** Makes the set the whole ring. */
export function fillRing(set: Float64Array): number {
	set[0] = RING_START;
	set[1] = RING_END;
	return 1;
}

/** Makes a set the least single interval that holds another of n intervals, n above 0. */
export function hullOf(set: Float64Array, other: Float64Array, n: number): number {
	set[0] = other[0]!;
	set[1] = other[2 * n - 1]!;
	return 1;
}

/** Takes the open interval (lo, hi) out of a set. */
export function subtractInterval(set: Float64Array, n: number, lo: number, hi: number): number {
	if (!(lo < hi)) return n;
	let i = 0;
	while (i < n && set[2 * i + 1]! <= lo) i++;
	if (i === n || set[2 * i]! >= hi) return n;
	if (set[2 * i]! < lo) {
		if (set[2 * i + 1]! > hi) {
			// The gap lies inside one interval: make room for its second half.
			for (let j = 2 * n - 1; j >= 2 * i + 1; j--) set[j + 2] = set[j]!;
			set[2 * i + 1] = lo;
			set[2 * i + 2] = hi;
			return n + 1;
		}
		set[2 * i + 1] = lo;
		i++;
	}
	let kept = i;
	for (let j = i; j < n; j++) {
		const start = set[2 * j]!;
		const end = set[2 * j + 1]!;
		if (end <= hi) continue;
		set[2 * kept] = start < hi ? hi : start;
		set[2 * kept + 1] = end;
		kept++;
	}
	return kept;
}

/** Keeps of a set what lies in [lo, hi]. */
function keepInterval(set: Float64Array, n: number, lo: number, hi: number): number {
	let kept = 0;
	for (let j = 0; j < n; j++) {
		const start = set[2 * j]!;
		const end = set[2 * j + 1]!;
		const first = start > lo ? start : lo;
		const last = end < hi ? end : hi;
		if (first >= last) continue;
		set[2 * kept] = first;
		set[2 * kept + 1] = last;
		kept++;
	}
	return kept;
}

/**
 * Keeps of a set the phi with alpha + beta cos phi + gamma sin phi >= 0 for each of several conditions.
 *
 * A test changes sign where the line alpha + beta c + gamma s = 0 cuts the unit circle, at
 * (-alpha (beta, gamma) +- q (gamma, -beta)) / r^2 with r^2 = beta^2 + gamma^2, q^2 = r^2 - alpha^2; the
 * pseudo-angle needs no division by r^2. A line that touches the circle, or misses it by rounding,
 * keeps all or nothing, whichever side it is on; a sliver of rounding is never taken for its
 * complement, since an interval with alpha >= 0 spans at least half of the ring and one with alpha < 0
 * at most half.
 *
 * The conditions come in an array and a set of one interval is cut in place, because numbers handed to
 * functions one by one are boxed, which costs more here than the arithmetic.
 *
 * @param conditions alpha, beta, gamma of each, one after the other
 * @param count how many there are
 */
export function clipAll(
	set: Float64Array,
	intervals: number,
	conditions: Float64Array,
	count: number
): number {
	let n = intervals;
	for (let k = 0; k < 3 * count && n > 0; k += 3) {
		const alpha = conditions[k]!;
		const beta = conditions[k + 1]!;
		const gamma = conditions[k + 2]!;
		const q2 = beta * beta + gamma * gamma - alpha * alpha;
		if (!(q2 > 0)) {
			if (alpha >= 0) continue;
			return 0;
		}
		const q = Math.sqrt(q2);
		const enter = pseudoAngle(-alpha * beta + gamma * q, -alpha * gamma - beta * q);
		const leave = pseudoAngle(-alpha * beta - gamma * q, -alpha * gamma + beta * q);
		if (enter <= leave) {
			if (alpha >= 0 && leave - enter < 1) continue;
			if (n > 1) n = keepInterval(set, n, enter, leave);
			else {
				if (set[0]! < enter) set[0] = enter;
				if (set[1]! > leave) set[1] = leave;
				if (!(set[0]! < set[1]!)) return 0;
			}
		} else {
			if (alpha < 0 && enter - leave < 1) return 0;
			if (n > 1) n = subtractInterval(set, n, leave, enter);
			else if (enter > set[0]! && leave < set[1]!) {
				if (set[0]! < leave) {
					if (set[1]! > enter) {
						set[3] = set[1]!;
						set[2] = enter;
						n = 2;
					}
					set[1] = leave;
				} else if (set[1]! > enter) set[0] = enter;
				else return 0;
			}
		}
	}
	return n;
}

/** Takes a set `other` of m intervals out of a set. */
export function subtractSet(set: Float64Array, n: number, other: Float64Array, m: number): number {
	let left = n;
	for (let j = 0; j < m && left > 0; j++) {
		left = subtractInterval(set, left, other[2 * j]!, other[2 * j + 1]!);
	}
	return left;
}

/** Joins a set `other` of m intervals to a set. */
export function uniteSet(set: Float64Array, n: number, other: Float64Array, m: number): number {
	if (n === 0) {
		for (let k = 0; k < 2 * m; k++) set[k] = other[k]!;
		return m;
	}
	let count = n;
	for (let j = 0; j < m; j++) {
		let start = other[2 * j]!;
		let end = other[2 * j + 1]!;
		let first = 0;
		while (first < count && set[2 * first + 1]! < start) first++;
		let last = first;
		while (last < count && set[2 * last]! <= end) {
			if (set[2 * last]! < start) start = set[2 * last]!;
			if (set[2 * last + 1]! > end) end = set[2 * last + 1]!;
			last++;
		}
		// Intervals first to last - 1 become one.
		const shift = 1 - (last - first);
		if (shift === 1) {
			for (let k = 2 * count - 1; k >= 2 * last; k--) set[k + 2] = set[k]!;
		} else if (shift < 0) {
			for (let k = 2 * last; k < 2 * count; k++) set[k + 2 * shift] = set[k]!;
		}
		set[2 * first] = start;
		set[2 * first + 1] = end;
		count += shift;
	}
	return count;
}

/** Total length of a set in radians; the whole ring is exactly 2 pi. */
export function measureSet(set: Float64Array, n: number): number {
	let total = 0;
	for (let j = 0; j < n; j++) {
		total += angleOfPseudo(set[2 * j + 1]!) - angleOfPseudo(set[2 * j]!);
	}
	return total;
}
