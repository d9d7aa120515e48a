/**
 * Airy's rainbow integral f(z) = integral over t from 0 to infinity of cos(pi/2 (z t - t^3)), by Simpson's
 * rule along the path t = s exp(-i pi/6), on which exp(-i pi/2 (z t - t^3)) dies away as exp(-pi/2 s^3)
 * (van de Hulst, "Light Scattering by Small Particles", 1957, ch. 13).
 */
export function rainbowIntegral(z: number): number {
	const steps = 4000;
	const end = 5;
	const cos6 = Math.cos(Math.PI / 6);
	const sin6 = Math.sin(Math.PI / 6);
	// exp(i pi/2 (t^3 - z t)) dt with t = s e^{i pi/6}: t^3 = i s^3.
	const integrand = (s: number): number => {
		const size = Math.exp((-Math.PI / 2) * s ** 3 + (Math.PI / 2) * z * s * sin6);
		const phase = (-Math.PI / 2) * z * s * cos6;
		// Real part of size e^{i phase} e^{i pi/6}.
		return size * (Math.cos(phase) * cos6 - Math.sin(phase) * sin6);
	};
	let sum = integrand(0) + integrand(end);
	for (let i = 1; i < steps; i++) sum += integrand((i * end) / steps) * (i % 2 === 1 ? 4 : 2);
	return (sum * end) / steps / 3;
}
