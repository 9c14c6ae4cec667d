import { describe, expect, it } from 'vitest';
import { type BoardFacts, boardRowOf } from '#shared/pour/board-row.ts';
import type { Readiness, ReadinessKind } from '#shared/pour/readiness.ts';
import { decisionBodyOf } from '../record/sample-records.ts';

const { shown } = decisionBodyOf(1, null);
const at = new Date('2026-12-03T07:10:00Z');

function readiness(counts: Partial<Record<ReadinessKind, number>>, isReady = false): Readiness {
	const sentences = Object.keys(counts).map((kind) => ({
		kind: kind as ReadinessKind,
		text: `${kind} said.`,
		isGood: ['within', 'left-out', 'after-concrete', 'flag-closed'].includes(kind),
	}));
	const askedCount = Object.entries(counts).reduce((sum, [kind, n]) => (['left-out', 'after-concrete'].includes(kind) ? sum : sum + n), 0);
	return { isReady, sentences, counts, askedCount, goneCount: 0 };
}

function facts(more: Partial<BoardFacts> = {}): BoardFacts {
	return {
		state: 'planned',
		point: 'before-pour',
		pointState: 'open',
		company: 'Fennick Forms',
		readiness: readiness({ within: 2 }, true),
		shown: { checkpoints: shown.checkpoints, flags: [] },
		holdReasons: null,
		answerBy: null,
		releasers: ['R. Amadi'],
		submittedAt: null,
		calledBy: null,
		signedBy: null,
		signedAt: null,
		openConditions: 0,
		...more,
	};
}

const flag = (state: string) => ({
	flagId: '00000000-0000-4000-8000-000000000777',
	modelId: '00000000-0000-4000-8000-000000000900',
	globalId: 'c3',
	mark: 'C/3',
	characteristic: 'face',
	state,
	outcome: state,
	concession: null,
});
const untouched = ['open', 'open', 'open', 'open'];

describe('a pour’s row on the board', () => {
	it('hangs where it is not in order: surveyed, checked, flags, released', () => {
		const row = (counts: Partial<Record<ReadinessKind, number>>, flags: string[] = []) =>
			boardRowOf(facts({ readiness: readiness(counts), shown: { checkpoints: [], flags: flags.map(flag) }, answerBy: at }));
		expect(row({ 'not-measured': 3 })).toMatchObject({ at: 0, words: 'No survey yet', stations: [...untouched, ...untouched] });
		expect(row({ 'not-measured': 1, within: 2 })).toMatchObject({ at: 0, stations: ['half', 'half', 'open', 'open', ...untouched] });
		expect(row({ 'no-rule': 1, within: 2 })).toMatchObject({ at: 1, words: 'no-rule said' });
		expect(row({ outside: 2, within: 2 }, ['open', 'open'])).toMatchObject({
			at: 2,
			words: '2 flags; Fennick Forms to answer',
			moment: { word: 'by', at },
		});
		expect(row({ outside: 1 }, ['put-right']).words).toBe('1 flag put right, to be measured');
		expect(row({ outside: 1 }, ['answered']).words).toBe('1 flag with the engineers');
	});

	it('says for whom a ready one waits', () => {
		expect(boardRowOf(facts())).toMatchObject({ at: 3, words: 'Ready; Fennick Forms to call it', isTaut: true });
		expect(boardRowOf(facts({ pointState: 'called', calledBy: 'Lena Fennick' })).words).toBe(
			'Ready, called by Lena Fennick; to be submitted',
		);
		expect(boardRowOf(facts({ pointState: 'submitted', submittedAt: at }))).toMatchObject({
			at: 3,
			words: 'Ready; waits for R. Amadi',
			moment: { word: 'since', at },
		});
	});

	it('is slack where it rests on what is older, or is held', () => {
		expect(boardRowOf(facts({ readiness: readiness({ 'element-moved': 2, within: 1 }) }))).toMatchObject({
			isTaut: false,
			at: 1,
			words: 'element-moved said',
		});
		const held = boardRowOf(facts({ pointState: 'released', holdReasons: ['Check 4 was withdrawn.'] }));
		expect(held).toMatchObject({ isTaut: false, words: 'Hold: Check 4 was withdrawn' });
		expect(held.at).toBe(3);
	});

	it('is in order up to the concrete once it is released, and after it begins anew', () => {
		expect(boardRowOf(facts({ pointState: 'released', signedBy: 'R. Amadi', signedAt: at }))).toMatchObject({
			at: 4,
			words: 'Released by R. Amadi',
			moment: { word: '', at },
		});
		const cast = boardRowOf(facts({ state: 'cast', point: 'after-pour', readiness: readiness({ 'not-measured': 2 }) }));
		expect(cast).toMatchObject({ at: 4, words: 'After: No survey yet', isTaut: true });
		expect(cast.stations.slice(0, 4)).toEqual(['solid', 'solid', 'solid', 'solid']);
		expect(boardRowOf(facts({ state: 'cast', point: 'after-pour', pointState: 'released' })).at).toBeNull();
	});

	it('shows as worst what is furthest against its own limits, not what is largest', () => {
		const [one] = shown.checkpoints;
		const wide = { ...one!, checkpointId: 'wide', deviationMm: 18, limitsMm: [-30, 30] as [number, number] };
		const narrow = { ...one!, checkpointId: 'narrow', deviationMm: -6, limitsMm: [-5, 5] as [number, number] };
		expect(boardRowOf(facts({ shown: { checkpoints: [wide, narrow], flags: [] } })).worst?.checkpointId).toBe('narrow');
		expect(boardRowOf(facts({ shown: { checkpoints: [{ ...one!, deviationMm: null }], flags: [] } })).worst).toBeNull();
	});
});
