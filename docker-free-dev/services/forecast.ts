import type { Guard } from '../lib/guard.ts';
import type { Service } from '../lib/supervise.ts';
import { startDouble } from './double.ts';

export interface ForecastOptions {
	port: number;
	logsDir: string;
	guard: Guard;
	notice?: (line: string) => void;
}

/** Starts the double of the forecast service. */
export function startForecast(options: ForecastOptions): Promise<Service> {
	return startDouble({ kind: 'forecast', ...options });
}
