import { execFileSync } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { PairsOfSetup, Shelving } from '#shared/fit/contract.ts';
import { shelvedInput } from '#shared/fit/shelved-input.ts';
import { seededRandom } from '#shared/geometry/seeded-random.ts';
import { blankSetupObservation, blankSurveyObservation } from '#shared/survey/observation-record.ts';
import { fitReport } from '../../server/features/fit/fit-report.ts';
import { caution } from '../../server/features/fit/fit-report-close.ts';
import type { FitReportData } from '../../server/features/fit/fit-report-data.ts';
import { inWords, printableRuns } from '../../server/platform/pdf/printable.ts';
import { writeReport } from '../../server/platform/pdf/write-report.ts';

const folder = mkdtempSync(join(tmpdir(), 'fit-report-'));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

const shelves: Shelving[] = [
	{ name: 'T2', shelf: 'held-back', reason: null },
	{ name: 'T3', shelf: 'set-aside', reason: 'Mark disturbed by the excavator' },
	{ name: 'T4', shelf: 'in-the-fit', reason: 'Rod height not certain', use: 'plan' },
];

function pairs(): PairsOfSetup['pairs'] {
	const random = seededRandom(99);
	return Array.from({ length: 9 }, (_, i) => {
		const place: [number, number, number] = [random() * 60, random() * 40, random() * 6];
		const off = () => (random() - 0.5) * 0.003;
		return {
			name: `T${i + 1}`,
			control: place,
			survey: [place[0] - 7 + off(), place[1] + 3 + off(), place[2] - 1 + off()],
			surveySigma: [0.001, 0.001, 0.001],
			controlSigma: [0.001, 0.001, 0.0008],
		};
	});
}

function data(over: Partial<FitReportData> = {}): FitReportData {
	const own = pairs();
	const outcome = computeFit(shelvedInput(own, 'levelled', null, shelves));
	if (!outcome.ok) throw new Error(outcome.refusal.message);
	const at = new Date('2026-12-01T09:30:00Z');
	return {
		fit: {
			madeWith: null,
			network: null,
			fitId: '00000000-0000-4000-8000-000000000001',
			number: 14,
			surveyId: '00000000-0000-4000-8000-000000000002',
			setupId: '00000000-0000-4000-8000-000000000003',
			setupName: 'S2',
			controlSetId: '00000000-0000-4000-8000-000000000004',
			kind: 'levelled',
			state: 'adopted',
			rmsM: outcome.result.rms,
			pairCount: 7,
			madeBy: 'Jo Marsh',
			madeAt: at,
			adoptedBy: 'Jo Marsh',
			adoptedById: '00000000-0000-4000-8000-000000000005',
			adoptedAt: at,
			adoptedReason: 'Held-back mark agrees',
			checkedBy: null,
			checkedAt: null,
			checkedNote: null,
			isSecondAsked: true,
			surveyorInCharge: { name: 'Zofia Łącka', licence: 'L-4711', jurisdiction: 'Invented' },
			changes: ['T3 set aside: Mark disturbed by the excavator.'],
			inputsSha256: 'ab'.repeat(32),
			isNewest: true,
			knownScale: null,
			shelves,
			relabellings: [],
			result: outcome.result,
			pairs: {
				setupId: '00000000-0000-4000-8000-000000000003',
				controlSetId: '00000000-0000-4000-8000-000000000004',
				pairs: own,
				controlWithoutTarget: ['T10'],
				targetsWithoutControl: [],
				sigmaNote: null,
			},
		},
		siteName: 'Marrowby pump house',
		isInvented: true,
		timeZone: 'Europe/London',
		printedAt: at,
		survey: {
			number: 3,
			name: 'ground columns',
			stage: 'as-cast',
			surveyedOn: '2026-11-30',
			observer: 'Jo Marsh',
			instrument: 'total station 1″',
			serial: '0417',
			fileName: 'survey-3.csv',
			fileSha256: 'cd'.repeat(32),
			storedBy: 'Jo Marsh',
			observation: {
				...blankSurveyObservation,
				temperatureC: 4.5,
				ppm: -3.2,
				ppmApplied: 'in-instrument',
				fieldCheck: 'yes',
				fieldCheckNote: 'collimation 2″',
			},
		},
		setup: {
			levelling: 'levelled',
			bringsScale: true,
			pointSigmaM: { plan: 0.0015, height: 0.001 },
			commonMm: 0.5,
			instrumentHeightM: 1.5,
			observation: { ...blankSetupObservation, closingMm: 1.2 },
		},
		control: {
			number: 1,
			name: 'Site control',
			frame: 'map',
			fileName: 'control.csv',
			fileSha256: 'ef'.repeat(32),
			points: [...own.map(({ name, control }) => ({ name, designM: control })), { name: 'T10', designM: [1, 2, 3] as const }].map(
				(point) => ({
					code: 'CP',
					sigmaPlanM: 0.001,
					sigmaHeightM: 0.0008,
					state: 'in-use' as const,
					howSet: null,
					setBy: null,
					verifiedAt: null,
					...point,
				}),
			),
		},
		mapConversion: null,
		grid: [
			{
				tag: 'A',
				points: [
					[0, 0],
					[0, 40],
				],
			},
		],
		measured: [
			{ name: 'C/3', surveyM: [10, 12, 2] },
			{ name: 'D/9', surveyM: [90, 12, 2] },
		],
		measuredCount: 2,
		...over,
	};
}

describe('the printed fit report', () => {
	let file: string;
	let printed: string;
	beforeAll(async () => {
		file = join(folder, 'fit.pdf');
		writeFileSync(file, await writeReport(fitReport(data())));
		printed = execFileSync('pdftotext', ['-layout', file, '-'], { encoding: 'utf8' });
	}, 60_000);
	const flat = () => printed.replace(/\s+/g, ' ');

	it('has the sections of the trade in their order', () => {
		const titles = [
			'Project and report',
			'Purpose and scope',
			'Persons',
			'Instruments',
			'Weather and atmospheric correction',
			'Datum',
			'Control used',
			'Control available but not used',
			'Method',
			'Parameters',
			'Residuals of each pair',
			'Held-back check pairs',
			'Global test',
			'Uncertainty at the measured places',
			'Quality: what was checked, and limits of use',
			'Appendix: observations and files',
			'Signatures and caution',
		];
		const places = titles.map((title, index) => printed.search(new RegExp(`^\\s*${index + 1}\\s+${title}`, 'm')));
		expect(places.every((place) => place >= 0)).toBe(true);
		expect([...places].sort((a, b) => a - b)).toEqual(places);
	});

	it('has every figure of every pair, and says what was left blank', () => {
		const { fit } = data();
		for (const pair of fit.result.pairs) {
			const line = printed.split('\n').filter((row) => row.trim().startsWith(pair.name));
			for (const value of pair.residual.filter((one) => one !== null)) {
				const mm = (Math.abs(value) * 1000).toFixed(1);
				expect(
					line.some((row) => row.includes(mm)),
					`${pair.name} ${mm}`,
				).toBe(true);
			}
		}
		expect(flat()).toContain(`rms ${(fit.result.rms * 1000).toFixed(1)} mm`);
		expect(flat()).toContain(fit.result.varianceFactor!.toFixed(3));
		for (const words of [
			'Mark disturbed by the excavator',
			'T4 is used in plan only: Rod height not certain',
			'not sighted from this set-up',
			'NOT CHECKED by a second person',
			'L-4711',
			'Zofia Łącka',
			'certificate not stated',
			'Pressure not stated',
			'−3.2 ppm',
			'applied in the instrument',
			'yes: collimation 2 arc seconds',
			'1.2 mm',
			'best known: C/3',
			'worst known: D/9',
			'This site is invented',
			fit.inputsSha256,
			'cd'.repeat(32),
			'ef'.repeat(32),
		])
			expect(flat(), words).toContain(words);
		expect(flat()).toContain(caution);
	});

	it('is tagged, embeds its fonts, and counts its pages', () => {
		const info = execFileSync('pdfinfo', [file], { encoding: 'utf8' });
		expect(info).toMatch(/Tagged:\s+yes/);
		expect(info).toMatch(/Page size:.*A4/);
		const count = Number(/Pages:\s+(\d+)/.exec(info)?.[1]);
		for (let page = 1; page <= count; page++) expect(flat()).toContain(`page ${page} of ${count}`);
		const fonts = execFileSync('pdffonts', [file], { encoding: 'utf8' }).trim().split('\n').slice(2);
		expect(fonts.length).toBeGreaterThan(2);
		for (const font of fonts) expect(font, font).toMatch(/AtkinsonHyperlegible.*\byes yes yes\b/);
		const structure = execFileSync('pdfinfo', ['-struct', file], { encoding: 'utf8', stdio: ['ignore', 'pipe', 'pipe'] });
		for (const tag of ['H1', 'H2', 'Table', 'Caption', 'Figure', 'TH']) expect(structure).toMatch(new RegExp(`^\\s+${tag}\\b`, 'm'));
		expect(structure.match(/^\s+H2\b/gm)).toHaveLength(17);
	});

	it('is the same file for the same fit and moment', async () => {
		const again = await writeReport(fitReport(data()));
		const text = join(folder, 'again.pdf');
		writeFileSync(text, again);
		expect(execFileSync('pdftotext', ['-layout', text, '-'], { encoding: 'utf8' })).toBe(printed);
	});
});

describe('glyphs', () => {
	// What our reports and people's names are likely to hold, signs we know to be missing, and an alphabet we have not.
	const sample = 'ABCXYZ abcxyz 0123456789 +−±×°²½–—“”’…/()[]%·:;,.!? äöüßéèñçåøÅØ āčđęłńőřšťūžŁŚŽ';

	it('of a test page come back as they went in, signs as words, and nothing vanishes', async () => {
		const file = join(folder, 'glyphs.pdf');
		const tricky = 'σ ≤ 3 µm → χ² ≥ 2″ Ж漢';
		writeFileSync(
			file,
			await writeReport({
				title: 'Glyphs',
				subtitle: sample,
				foot: 'Glyphs',
				author: 'test',
				printedAt: new Date(0),
				sections: [
					{
						number: 1,
						title: tricky,
						blocks: [
							{ kind: 'table', caption: sample, columns: [{ head: 'One', share: 1, isMono: true }], rows: [['x', tricky], ['−12.5']] },
							{ kind: 'text', text: tricky },
						],
					},
				],
			}),
		);
		const text = execFileSync('pdftotext', [file, '-'], { encoding: 'utf8' }).replace(/\s+/g, ' ');
		// Fonts of two alphabets are two runs, between which the reader may see a space.
		const bare = (said: string) => said.replace(/\s+/g, '');
		expect(bare(text)).toContain(bare(sample));
		expect(bare(text)).toContain(bare('s.d. at most 3 micrometres to chi-square at least 2 arc seconds [U+0416][U+6F22]'));
		expect(text).not.toMatch(/[σ≤µ→χ≥″Ж漢]/);
	});

	it('keep every code point in one run or by its number', () => {
		const has = (codePoint: number, isExtended: boolean) => (isExtended ? codePoint > 255 && codePoint < 500 : codePoint < 256);
		expect(printableRuns('aŁbЖ', has)).toEqual([
			{ text: 'a', isExtended: false },
			{ text: 'Ł', isExtended: true },
			{ text: 'b[U+0416]', isExtended: false },
		]);
		expect(inWords('5 µm, σ̂₀²')).toBe('5 micrometres, variance factor');
	});
});
