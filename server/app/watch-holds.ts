import { holdTouched } from '../features/pour/hold-touched.ts';
import type { Platform } from '../platform/platform.ts';

/** How often the released pours are looked at without anybody asking. */
const everyMs = 60_000;

/** Looks by the clock for what touches released pours, so that a hold reaches the people before anybody opens a page. */
export function watchHolds(platform: Platform): { stop: () => Promise<void> } {
	let running: Promise<void> = Promise.resolve();
	const look = (): void => {
		running = holdTouched(platform).catch((error: unknown) => console.error('Looking at the released pours failed:', error));
	};
	const timer = setInterval(look, everyMs);
	timer.unref();
	return {
		stop: async () => {
			clearInterval(timer);
			await running;
		},
	};
}
