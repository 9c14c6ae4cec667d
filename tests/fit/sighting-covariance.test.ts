import { describe, expect, it } from 'vitest';
import { sightingCovariance, sigmasOf } from '#shared/fit/sighting-covariance.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';

const instrument = { distanceM: 0.0015, distancePpm: 2, angleRad: (3 / 3600) * (Math.PI / 180) };

describe('the covariance of a sighting', () => {
	it('is the distance along a level ray and the angle across it', () => {
		const [east, north, level] = sigmasOf(sightingCovariance(instrument, [10, 20, 5], [110, 20, 5], 0));
		expect(east).toBeCloseTo(0.0015 + 2e-6 * 100, 12);
		// 3″ at 100 m are 1.454 mm.
		expect(north).toBeCloseTo(0.0014544, 7);
		expect(level).toBeCloseTo(0.0014544, 7);
	});

	it('adds what the target is off its mark on every axis', () => {
		const without = sightingCovariance(instrument, [0, 0, 0], [30, 40, 7], 0);
		const having = sightingCovariance(instrument, [0, 0, 0], [30, 40, 7], 0.002);
		for (let k = 0; k < 3; k++) for (let l = 0; l < 3; l++) expect(having[k]![l]! - without[k]![l]!).toBeCloseTo(k === l ? 4e-6 : 0, 15);
	});

	it('is the scatter of places worked out from shaken polar readings', () => {
		const random = seededRandom(17);
		const normal = (): number => Array.from({ length: 12 }, random).reduce((sum, value) => sum + value, -6);
		const station = [3, -8, 2] as const;
		const place = [41, 22, 19] as const;
		const ray = place.map((value, k) => value - station[k]!);
		const range = Math.hypot(...ray);
		const bearing = Math.atan2(ray[1]!, ray[0]!);
		const rise = Math.asin(ray[2]! / range);
		const coarse = { distanceM: 0.01, distancePpm: 50, angleRad: 2e-4 };
		const sums = Array.from({ length: 9 }, () => 0);
		const draws = 40_000;
		for (let i = 0; i < draws; i++) {
			const d = range + (0.01 + 50e-6 * range) * normal();
			const b = bearing + 2e-4 * normal();
			const v = rise + 2e-4 * normal();
			const off = [d * Math.cos(v) * Math.cos(b), d * Math.cos(v) * Math.sin(b), d * Math.sin(v)].map((value, k) => value - ray[k]!);
			for (let k = 0; k < 3; k++) for (let l = 0; l < 3; l++) sums[3 * k + l]! += off[k]! * off[l]!;
		}
		const stated = sightingCovariance(coarse, station, place, 0);
		const size = Math.max(...stated.flat().map(Math.abs));
		for (let k = 0; k < 3; k++)
			for (let l = 0; l < 3; l++) expect(Math.abs(sums[3 * k + l]! / draws - stated[k]![l]!)).toBeLessThan(0.03 * size);
	});

	it('is known straight up and at the station itself too', () => {
		const up = sightingCovariance(instrument, [0, 0, 0], [0, 0, 50], 0);
		expect(Math.sqrt(up[2][2])).toBeCloseTo(0.0016, 9);
		expect(Math.sqrt(up[0][0])).toBeGreaterThan(0);
		expect(sightingCovariance(instrument, [1, 2, 3], [1, 2, 3], 0.001)[0][0]).toBeCloseTo(0.0015 ** 2 + 1e-6, 15);
	});
});
