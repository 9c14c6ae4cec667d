import { describe, expect, it } from 'vitest';
import { levelRunFindings, levelRunOf, levelRunWords } from '#shared/survey/level-run.ts';
import { blankSetupObservation } from '#shared/survey/observation-record.ts';
import { readPointTable } from '#shared/survey/read-point-table.ts';

const run = (over: Partial<typeof blankSetupObservation>) => ({ ...blankSetupObservation, levelStart: 'BM1', levelClose: 'BM2', ...over });

describe('a level run', () => {
	it('may miss by 10 mm times the root of its kilometres', () => {
		expect(levelRunOf(run({ levelLengthKm: 1, levelMisclosureMm: 10 }))).toMatchObject({ allowedMm: 10, isWithin: true });
		expect(levelRunOf(run({ levelLengthKm: 0.25, levelMisclosureMm: -5 }))).toMatchObject({ allowedMm: 5, isWithin: true });
		expect(levelRunOf(run({ levelLengthKm: 0.25, levelMisclosureMm: -5.1 }))).toMatchObject({ isWithin: false });
		expect(levelRunOf(run({ levelLengthKm: 4, levelMisclosureMm: 20.1 }))?.isWithin).toBe(false);
	});

	it('is a finding where it is over or cannot be judged, and none where it is within or nothing was said', () => {
		const codes = (over: Parameters<typeof run>[0]) => levelRunFindings(run(over)).map(({ code }) => code);
		expect(codes({ levelLengthKm: 0.36, levelMisclosureMm: 6 })).toEqual([]);
		expect(codes({ levelLengthKm: 0.36, levelMisclosureMm: 6.2 })).toEqual(['level-misclosure']);
		expect(codes({ levelLengthKm: null, levelMisclosureMm: 2 })).toEqual(['level-open']);
		expect(levelRunFindings(blankSetupObservation)).toEqual([]);
		expect(levelRunOf(null)).toBeNull();
		const [over] = levelRunFindings(run({ levelClose: 'BM1', levelLengthKm: 0.36, levelMisclosureMm: 8 }));
		expect(over!.message).toMatch(/from BM1 and back misses its closing benchmark by 8\.0 mm; 10·√km allows 6\.0 mm \(common practice\)/);
		expect(levelRunWords(levelRunOf(run({ levelLengthKm: 1, levelMisclosureMm: -4 }))!)).toContain(
			'from BM1 to BM2, 1 km: closes to −4.0 mm, within',
		);
	});

	it('brings a file of heights alone, where that is asked for', () => {
		const bytes = new TextEncoder().encode('name,height,sigma_height\nBM1,10.002,0.001\nS1,9.5,0.001\nS2,,0.001\n');
		const reading = {
			encoding: 'utf-8',
			delimiter: ',',
			decimalMark: '.',
			hasHeader: true,
			unit: 'm',
			columns: { name: 0, height: 1, sigmaHeight: 2 },
		} as const;
		const { rows, faults } = readPointTable(bytes, reading, { mayBeHeights: true });
		expect(rows.map(({ name, xyzM }) => [name, xyzM])).toEqual([
			['BM1', [null, null, 10.002]],
			['S1', [null, null, 9.5]],
		]);
		expect(faults.map(({ message }) => message)).toEqual([expect.stringMatching(/^Row 4: S2 has no /)]);
		expect(readPointTable(bytes, reading).faultCount).toBe(1);
	});
});
