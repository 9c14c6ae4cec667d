import { describe, expect, it } from 'vitest';
import { countTries } from '../../server/platform/tries.ts';

describe('the limit on tries', () => {
	it('lets eight of ten thousand through, and eight more when the quarter of an hour is over', () => {
		let now = 0;
		const tries = countTries(() => new Date(now));
		const let10000In = () => Array.from({ length: 10_000 }, () => tries.take('email ida@example.com', 8)).filter(Boolean).length;
		expect(let10000In()).toBe(8);
		now += 15 * 60_000 - 1;
		expect(let10000In()).toBe(0);
		now += 1;
		expect(let10000In()).toBe(8);
	});

	it('is not outrun by ten thousand addresses, each tried once, from one network address', () => {
		const tries = countTries(() => new Date(0));
		const letIn = Array.from({ length: 10_000 }, (_, n) => [
			tries.take(`email p${n}@example.com`, 8),
			tries.take('address 203.0.113.9', 20),
		]);
		expect(letIn.filter(([, byAddress]) => byAddress)).toHaveLength(20);
	});

	it('gives back a try that was none, and never below none', () => {
		const tries = countTries(() => new Date(0));
		tries.giveBack('key');
		expect([tries.take('key', 2), tries.take('key', 2), tries.take('key', 2)]).toEqual([true, true, false]);
		tries.giveBack('key');
		expect([tries.take('key', 2), tries.take('key', 2)]).toEqual([true, false]);
	});
});
