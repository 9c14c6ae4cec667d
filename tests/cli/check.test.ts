import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { simulatedNoise, simulatedSheet, simulateSurvey } from '#server/scripts/simulate-survey.ts';
import type { Finding, FitResult } from '#shared/fit/fit-schema.ts';
import { runCheckCommand } from '../../server/cli/check.ts';
import { readFileHere } from '../model/read-model-file.ts';
import { buildPrograms, type Programs } from '../platform/run-program.ts';

/** The command line's `check` as a process: the invented pump house with its planted faults, and files that are refused. */
interface Answer {
	fits: (FitResult & { setup: string | null })[];
	checkpoints: {
		id: string;
		mark: string;
		characteristic: string;
		measured: number[] | null;
		setup: string | null;
		pointCount: number;
		deviationMm: number | null;
		offsetMm: number[] | null;
		uncertaintyMm: number | null;
		limitsMm: (number | null)[] | null;
		rule: string | null;
		verdict: string;
	}[];
	derived: { globalId: string; characteristic: string; deviationMm: number; uncertaintyMm: number | null; from: string[]; rule: string }[];
	findings: Finding[];
	summary: Record<string, number>;
}

let programs: Programs;
const folder = mkdtempSync(join(tmpdir(), 'bb-check-'));
beforeAll(async () => {
	programs = await buildPrograms(['server/cli.ts', 'server/features/model/read-ifc.worker.ts']);
}, 120_000);
afterAll(() => {
	programs.remove();
	rmSync(folder, { recursive: true, force: true });
});

const fixture = (name: string): string => fileURLToPath(new URL(`../../fixtures/${name}`, import.meta.url));
const demo = (name: string): string => fixture(`demo/${name}`);
function written(name: string, content: string): string {
	const path = join(folder, name);
	writeFileSync(path, content);
	return path;
}

async function run(args: string[]): Promise<{ code: unknown; answer: unknown }> {
	const program = programs.run('cli', {}, '', ['check', ...args]);
	const code = await program.ended;
	return { code, answer: JSON.parse(program.out()) };
}
const given: Record<string, string> = {
	'--targets': demo('survey-1.csv'),
	'--control': demo('control-design.csv'),
	'--tolerances': demo('tolerances.json'),
	'--points': demo('survey-1.csv'),
	'--fit': 'levelled',
	'--common-mm': '0.5',
};
const check = (over: Record<string, string> = {}, model = demo('pump-house.ifc')) =>
	run([model, ...Object.entries({ ...given, ...over }).flat()]);
const byMark = ({ checkpoints }: Answer) => new Map(checkpoints.map((checkpoint) => [checkpoint.mark, checkpoint]));

describe('check on the command line', { timeout: 120_000 }, () => {
	it('finds the planted faults, and says of each how far and which way', async () => {
		const { code, answer } = await check();
		expect(code).toBe(0);
		const result = answer as Answer;
		expect(result.fits.map(({ setup, fit }) => [setup, fit])).toEqual([
			['S1', 'levelled'],
			['S2', 'levelled'],
		]);
		const outside = result.checkpoints.filter(({ verdict }) => verdict === 'outside');
		const elementsOff = [...new Set(outside.map(({ mark }) => mark.split('.')[0]))].sort();
		expect(elementsOff).toEqual(['BC3-G-1', 'BC3-G-3', 'C3-G', 'FC2-G', 'S2-G', 'WC2-3-SUM']);
		// Planted: the column leans 21 mm east at its highest checkpoint (east face proud, west face shy), the slab's edge is 14 mm low.
		const marks = byMark(result);
		const top = outside.filter(({ mark }) => /^C3-G\.[EW]/.test(mark));
		for (const { mark, deviationMm, limitsMm, rule, uncertaintyMm } of top) {
			expect(Math.abs(deviationMm! - (mark.includes('.E') ? 21 : -21))).toBeLessThan(uncertaintyMm! + 2);
			expect([limitsMm, rule]).toEqual([[-10, 10], 'columns-face']);
		}
		expect(top).toHaveLength(2);
		for (const { deviationMm } of outside.filter(({ mark }) => mark.startsWith('S2-G.'))) expect(deviationMm! + 14).toBeGreaterThan(-4);
		const bolt = marks.get('BC3-G-1.H')!;
		expect(Math.hypot(...bolt.offsetMm!)).toBeCloseTo(bolt.deviationMm!, 9);
		const leaning = result.derived.find(({ from }) => from.some((id) => top.map((one) => one.id).includes(id)));
		expect(leaning).toMatchObject({ characteristic: 'plumb', rule: 'columns-plumb' });
		const total = Object.values(result.summary).reduce((sum, n) => sum + n, 0);
		expect(total).toBe(result.checkpoints.length);
		expect(result.summary.outside).toBe(outside.length);
		for (const { verdict, measured, deviationMm, pointCount, setup } of result.checkpoints) {
			const isMeasured = verdict !== 'not-measured';
			expect([measured !== null, deviationMm !== null, pointCount > 0, setup !== null]).toEqual(new Array(4).fill(isMeasured));
		}
	});

	it('gives back what a model’s checkpoints were displaced by, from files alone, each set-up on its own turned and shifted frame', async () => {
		const model = fixture('ifc/made-frame-metre-ifc4.ifc');
		const { checkpoints } = await readFileHere(model);
		const { displaced, setups, points } = simulateSurvey(checkpoints, 7);
		const targets = setups.flatMap(({ id, pairs }) =>
			pairs.map(({ name, survey, surveySigma }) => [name, ...survey, ...surveySigma!, id].join(',')),
		);
		const control = setups.flatMap(({ pairs }) =>
			pairs.map(({ name, control: place, controlSigma }) => [name, ...place, controlSigma![0], controlSigma![2]].join(',')),
		);
		const observed = points.map(({ name, surveyPoint, sigmaM, setupId }) => [name, ...surveyPoint, ...sigmaM!, setupId].join(','));
		const header = 'name,x,y,z,sigma_x,sigma_y,sigma_z,setup';
		const { code, answer } = await check(
			{
				'--targets': written('loop-targets.csv', [header, ...targets].join('\n')),
				'--control': written('loop-control.csv', ['name,easting,northing,height,sigma_plan,sigma_height', ...control].join('\n')),
				'--points': written('loop-points.csv', [header, ...observed].join('\n')),
				'--tolerances': written('loop-sheet.json', JSON.stringify(simulatedSheet)),
				'--fit': 'free',
				'--common-mm': String(simulatedNoise.commonMm),
			},
			model,
		);
		expect(code).toBe(0);
		const result = answer as Answer;
		expect(result.checkpoints.map(({ id }) => id)).toEqual(checkpoints.map(({ id }) => id));
		result.checkpoints.forEach(({ deviationMm, uncertaintyMm, offsetMm, verdict }, at) => {
			const truth = displaced[at]!;
			const missMm =
				truth.offsetMm === null
					? Math.abs(deviationMm! - truth.deviationMm)
					: Math.hypot(offsetMm![0]! - truth.offsetMm[0], offsetMm![1]! - truth.offsetMm[1]);
			expect(missMm).toBeLessThan(2.5 * uncertaintyMm!);
			if (truth.planted === 'inside') expect(verdict).toBe('within');
			if (truth.planted === 'outside') expect(verdict).toBe('outside');
		});
	});

	it('comes to the same from control in the map frame, and from files in US survey feet', async () => {
		const designOf = async () => byMark((await check()).answer as Answer);
		// Every second number of the points in feet: coordinates and σ, but not the offset, which is in millimetres always.
		const inFeet = (path: string, columns: RegExp): string => {
			const [header, ...rows] = readFileSync(path, 'utf8').trim().split('\n');
			const isLength = header!.split(',').map((name) => columns.test(name));
			const feet = (cell: string): string => String((Number(cell) * 3937) / 1200);
			return [
				header,
				...rows.map((row) =>
					row
						.split(',')
						.map((cell, at) => (isLength[at] ? feet(cell) : cell))
						.join(','),
				),
			].join('\n');
		};
		const survey = written('feet.csv', inFeet(demo('survey-1.csv'), /^([xyz]|sigma_.)$/));
		const control = written('control-feet.csv', inFeet(demo('control-map.csv'), /^(easting|northing|height|sigma_\w+)$/));
		const feet = await check({
			'--targets': survey,
			'--points': survey,
			'--control': control,
			'--control-frame': 'map',
			'--csv-unit': 'ftUS',
		});
		expect(feet.code).toBe(0);
		const mapped = byMark(feet.answer as Answer);
		for (const [mark, { deviationMm, verdict }] of await designOf()) {
			const other = mapped.get(mark)!;
			// Both control lists are rounded to 0.1 mm, each in its own frame.
			if (deviationMm !== null) expect(Math.abs(other.deviationMm! - deviationMm)).toBeLessThan(0.3);
			else expect(other.verdict).toBe(verdict);
		}
	});

	it('says of survey 2 that two labels are exchanged, and accuses nothing by a wrong fit', async () => {
		const { code, answer } = await check({ '--targets': demo('survey-2.csv'), '--points': demo('survey-2.csv') });
		expect(code).toBe(0);
		const { findings, summary } = answer as Answer;
		expect(findings.find((finding) => finding.code === 'swapped-labels')?.pairs.toSorted()).toEqual(['C2', 'C3']);
		expect(summary.within).toBe(0);
	});

	it('answers without points that nothing was measured', async () => {
		const { '--points': _, ...without } = given;
		const { code, answer } = await run([demo('pump-house.ifc'), ...Object.entries(without).flat()]);
		expect(code).toBe(0);
		const { summary, checkpoints } = answer as Answer;
		expect(summary['not-measured']).toBe(checkpoints.length);
	});
});

describe('what check refuses', { timeout: 120_000 }, () => {
	const targets = 'name,x,y,z\nA,0,0,0\nB,10,0,0\nC,0,10,0\n';
	const control = 'name,easting,northing,height\nA,0,0,0\nB,10,0,0\nC,0,10,0\n';
	const small = (over: Record<string, string> = {}) => ({
		'--targets': written('t.csv', targets),
		'--control': written('c.csv', control),
		'--points': written('p.csv', 'name,x,y,z\nP1,1,1,1\n'),
		'--fit': 'free',
		...over,
	});
	const sheet = (rule: object) => JSON.stringify({ name: 'S', decision: 'guarded', rules: [{ id: 'r', match: {}, ...rule }] });
	const cases: [string, string, () => Record<string, string>][] = [
		['scans', 'bad-input', () => ({ '--scan': 'a.laz' })],
		['an unknown option', 'bad-input', () => ({ '--sacn': 'a.laz' })],
		['an unknown fit', 'bad-input', () => ({ '--fit': 'best' })],
		['an unknown stage', 'bad-input', () => ({ '--stage': 'soon' })],
		['a unit that is none', 'bad-input', () => ({ '--csv-unit': 'furlong' })],
		['a common part below nought', 'bad-input', () => ({ '--common-mm': '-1' })],
		['a common part that is no number', 'not-finite', () => ({ '--common-mm': 'NaN' })],
		['a file that is not there', 'no-such-file', () => ({ '--targets': join(folder, 'none.csv') })],
		['a folder for a file', 'no-such-file', () => ({ '--control': folder })],
		['an empty file', 'bad-input', () => ({ '--targets': written('empty.csv', '') })],
		['a list without a header', 'bad-input', () => ({ '--targets': written('bare.csv', 'A,0,0,0\nB,10,0,0\nC,0,10,0\n') })],
		['a list without heights', 'bad-input', () => ({ '--targets': written('flat.csv', 'name,x,y\nA,0,0\n') })],
		['a column twice', 'bad-input', () => ({ '--targets': written('twice.csv', 'name,x,y,z,x\nA,0,0,0,1\n') })],
		['a cell that is no number', 'bad-input', () => ({ '--points': written('na.csv', 'name,x,y,z\nP1,1,N/A,1\nP2,1,1,1\n') })],
		['an infinite coordinate', 'not-finite', () => ({ '--points': written('inf.csv', 'name,x,y,z\nP1,1,1e999,1\nP2,1,1,1\n') })],
		['a negative σ', 'bad-sigma', () => ({ '--points': written('neg.csv', 'name,x,y,z,sigma_x,sigma_y,sigma_z\nP1,1,1,1,-1,1,1\n') })],
		['a mark twice', 'duplicate-name', () => ({ '--control': written('same.csv', `${control}A,1,1,1\n`) })],
		['too few pairs', 'too-few-pairs', () => ({ '--control': written('two.csv', control.split('\n').slice(0, 3).join('\n')) })],
		[
			'targets on a line',
			'on-a-line',
			() => ({
				'--targets': written('line.csv', targets.replace('C,0,10,0', 'C,20,0,0')),
				'--control': written('cline.csv', control.replace('C,0,10,0', 'C,20,0,0')),
			}),
		],
		['a set-up without targets', 'bad-input', () => ({ '--points': written('other.csv', 'name,x,y,z,setup\nP1,1,1,1,S9\n') })],
		['a sheet that is no JSON', 'bad-input', () => ({ '--tolerances': written('s1.json', '{') })],
		[
			'a rule with an unknown word',
			'bad-input',
			() => ({ '--tolerances': written('s2.json', sheet({ lowerMm: 0, upperMm: 1, color: 'red' })) }),
		],
		[
			'a limit that overflows',
			'bad-input',
			() => ({ '--tolerances': written('s3.json', sheet({ lowerMm: 0, upperMm: 7 }).replace('7', '1e999')) }),
		],
	];
	it.each(cases)('%s: %s', async (_, code, over) => {
		const options = { ...given, ...small(over()) };
		const refused = await runCheckCommand([fixture('ifc/made-frame-metre-ifc4.ifc'), ...Object.entries(options).flat()], () => {});
		expect(refused).toEqual({ exitCode: 2, output: { error: { code, message: expect.stringMatching(/\.$/), where: expect.any(String) } } });
	});

	it('as a process, with code 2 and nothing but the reason', async () => {
		const refused = await check(small({ '--points': written('na.csv', 'name,x,y,z\nP1,1,N/A,1\nP2,1,1,1\n') }));
		expect(refused).toMatchObject({
			code: 2,
			answer: { error: { code: 'bad-input', message: expect.stringContaining("'N/A' is not a number") } },
		});
	});

	it('a model that is none, with the reason', async () => {
		const refused = await check(small(), written('garbage.ifc', 'ISO-10303-22;\nno model\n'));
		expect(refused).toMatchObject({ code: 2, answer: { error: { code: 'not-ifc' } } });
		expect(await check(small(), join(folder, 'none.ifc'))).toMatchObject({ code: 2, answer: { error: { code: 'no-such-file' } } });
	});

	it('map coordinates where the model has no map position', async () => {
		const model = written(
			'no-map.ifc',
			readFileSync(fixture('demo/pump-house.ifc'), 'utf8').replace(/#\d+=\s*IFCMAPCONVERSION\([^;]*;/i, ''),
		);
		expect(await check({ '--control-frame': 'map' }, model)).toMatchObject({ code: 2, answer: { error: { code: 'no-map-conversion' } } });
	});

	it('a command without its files', async () => {
		expect(await run([])).toMatchObject({ code: 2, answer: { error: { code: 'bad-input', message: expect.any(String) } } });
		for (const args of [['a.ifc'], ['a.ifc', '--targets'], ['a.ifc', '--targets', '--control'], ['a.ifc', 'b.ifc']])
			expect(await runCheckCommand(args, () => {})).toMatchObject({ exitCode: 2, output: { error: { code: 'bad-input' } } });
	});
});
