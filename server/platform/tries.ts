/** Counts tries under a key within a window. In this process's memory: there is one server, and a restart forgives. */
export interface Tries {
	/** Counts one and tells whether it is still allowed. Counted before the work, so that many at once do not slip through. */
	take: (key: string, limit: number) => boolean;
	/** Gives one back: it turned out to be no wrong try. */
	giveBack: (key: string) => void;
}

const windowMs = 15 * 60_000;
/** More keys than this at once are an attack of its own: the oldest are dropped. */
const keyLimit = 50_000;

export function countTries(now: () => Date): Tries {
	const windows = new Map<string, { count: number; endsAt: number }>();
	const current = (key: string) => {
		const time = now().getTime();
		const known = windows.get(key);
		if (known !== undefined && known.endsAt > time) return known;
		const fresh = { count: 0, endsAt: time + windowMs };
		windows.delete(key);
		windows.set(key, fresh);
		for (const oldest of windows.keys()) {
			if (windows.size <= keyLimit) break;
			windows.delete(oldest);
		}
		return fresh;
	};
	return {
		take: (key, limit) => {
			const window = current(key);
			if (window.count >= limit) return false;
			window.count += 1;
			return true;
		},
		giveBack: (key) => {
			const window = current(key);
			window.count = Math.max(0, window.count - 1);
		},
	};
}
