import { describe, expect, it } from 'vitest';
import { tryHostile } from './hostile-input.ts';

describe('fuzz', () => {
	it('answers or refuses whatever comes (a sample; fuzz-fit.ts takes any range of seeds)', () => {
		const seen = { answered: 0, refused: 0 };
		for (let seed = 1; seed <= 3000; seed++) {
			const end = tryHostile(seed);
			if (typeof end === 'object') expect.fail(`seed ${seed}: ${end.fault}`);
			seen[end]++;
		}
		expect(seen.answered).toBeGreaterThan(300);
		expect(seen.refused).toBeGreaterThan(300);
	});
});
