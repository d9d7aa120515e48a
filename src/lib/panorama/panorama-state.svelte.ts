import { panoramaScale, type PanoramaScale, type Projection } from './geometry';
import { tracedDirections, withTracePoint, type TracePoint } from './trace';
import { typedNumber } from '../schemas/plan-form';

/** The fields that say how the picture lies, as they are typed. */
export interface MarkFields {
	projection: Projection;
	azimuth1: string;
	altitude1: string;
	x1: string;
	y1: string;
	azimuth2: string;
	altitude2: string;
	x2: string;
	y2: string;
}

/** Width of the picture's steps of a line drawn by hand: finer is only the hand's trembling. */
const LEAST_STEP = 1 / 700;

/** A panorama that is being marked and traced. */
export class PanoramaState {
	readonly widthPx: number;
	readonly heightPx: number;
	readonly #fields: () => MarkFields;
	points: TracePoint[] = $state.raw([]);
	#before: TracePoint[][] = $state.raw([]);
	/** The cross of the keyboard. */
	cross: TracePoint = $state.raw({ xPx: 0, yPx: 0 });

	constructor(
		{ widthPx, heightPx }: { widthPx: number; heightPx: number },
		points: TracePoint[],
		fields: () => MarkFields
	) {
		this.widthPx = widthPx;
		this.heightPx = heightPx;
		this.#fields = fields;
		this.points = points;
		this.cross = { xPx: widthPx / 2, yPx: heightPx / 2 };
	}

	readonly #worked: { scale: PanoramaScale | null; fault: string } = $derived.by(() => {
		const fields = this.#fields();
		const [azimuth1, azimuth2] = [typedNumber(fields.azimuth1), typedNumber(fields.azimuth2)];
		if (Number.isNaN(azimuth1) || Number.isNaN(azimuth2)) {
			return { scale: null, fault: 'Give the bearings of both marks.' };
		}
		const altitude = (text: string) => {
			const value = typedNumber(text);
			return Number.isNaN(value) ? null : value;
		};
		try {
			const scale = panoramaScale({
				widthPx: this.widthPx,
				heightPx: this.heightPx,
				projection: fields.projection,
				marks: [
					{
						xPx: typedNumber(fields.x1),
						yPx: typedNumber(fields.y1),
						azimuthDeg: azimuth1,
						altitudeDeg: altitude(fields.altitude1)
					},
					{
						xPx: typedNumber(fields.x2),
						yPx: typedNumber(fields.y2),
						azimuthDeg: azimuth2,
						altitudeDeg: altitude(fields.altitude2)
					}
				]
			});
			return { scale, fault: '' };
		} catch (thrown) {
			if (!(thrown instanceof RangeError)) throw thrown;
			return { scale: null, fault: thrown.message };
		}
	});

	/** Null while the marks do not tell it; then the fault says why. */
	get scale(): PanoramaScale | null {
		return this.#worked.scale;
	}
	get fault(): string {
		return this.#worked.fault;
	}

	/** The traced line as text: azimuth and altitude, a pair a line. */
	readonly corners: string = $derived.by(() => {
		const { scale } = this;
		if (!scale) return '';
		return tracedDirections(scale, this.points)
			.map(({ azimuthDeg, altitudeDeg }) => `${azimuthDeg}; ${altitudeDeg}`)
			.join('\n');
	});

	get canTakeBack(): boolean {
		return this.#before.length > 0;
	}

	/** Begins an act that is taken back as one. */
	begin(): void {
		this.#before = [...this.#before, this.points];
	}

	add(point: TracePoint): void {
		const inside = {
			xPx: Math.max(0, Math.min(this.widthPx, Math.round(point.xPx * 10) / 10)),
			yPx: Math.max(0, Math.min(this.heightPx, Math.round(point.yPx * 10) / 10))
		};
		this.points = withTracePoint(this.points, inside, this.widthPx * LEAST_STEP);
	}

	/** Takes out the place that is nearest to the cross. */
	removeNearCross(): void {
		const { xPx } = this.cross;
		const nearest = [...this.points].sort(
			(a, b) => Math.abs(a.xPx - xPx) - Math.abs(b.xPx - xPx)
		)[0];
		if (!nearest) return;
		this.begin();
		this.points = this.points.filter((point) => point !== nearest);
	}

	takeBack(): void {
		const last = this.#before.at(-1);
		if (!last) return;
		this.points = last;
		this.#before = this.#before.slice(0, -1);
	}

	clear(): void {
		this.begin();
		this.points = [];
	}
}
