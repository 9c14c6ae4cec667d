import { describe, expect, it } from 'vitest';
import type { FlagSummary } from '#shared/flag/contract.ts';
import type { PourSummary } from '#shared/pour/contract.ts';
import { boardOf } from '#shared/site/board.ts';
import type { BoardFacts } from '#shared/site/board-facts.ts';

const now = new Date('2026-12-03T08:00:00Z');
const at = (text: string) => new Date(text);

const aPour = (over: Partial<PourSummary> = {}): PourSummary => ({
	pourId: 'p7',
	number: '7',
	name: 'ground columns',
	companyId: 'fennick',
	companyName: 'Fennick Forms',
	plannedAt: at('2026-12-04T07:00:00Z'),
	elementCount: 4,
	state: 'planned',
	before: 'open',
	after: 'open',
	isHeld: false,
	...over,
});
const aFlag = (over: Partial<FlagSummary> = {}): FlagSummary => ({
	flagId: 'f1',
	number: 1,
	version: 1,
	modelId: 'm',
	globalId: 'g',
	kind: 'plan',
	mark: 'C/3',
	title: 'Column C/3',
	companyId: 'fennick',
	companyName: 'Fennick Forms',
	pours: [{ pourId: 'p7', number: '7' }],
	state: 'open',
	isWith: 'contractor',
	verdict: 'outside',
	worstMm: 23,
	worst: null,
	checkId: 'c',
	round: 1,
	answerBy: at('2026-12-05T16:00:00Z'),
	timeAsked: null,
	answer: null,
	decision: null,
	isDecidedWithoutAnswer: false,
	isConsentAwaited: false,
	closedOn: null,
	lapsedBecause: null,
	lapsedWords: null,
	raisedAt: at('2026-12-02T10:00:00Z'),
	changedAt: at('2026-12-02T10:00:00Z'),
	...over,
});
const knots = ['model', 'control', 'surveys', 'check', 'flags', 'pours', 'records'] as const;
const facts = (over: Partial<BoardFacts> = {}): BoardFacts => ({
	now,
	userId: 'me',
	roles: ['observer'],
	companyIds: [],
	line: { knots: knots.map((knot) => ({ knot, state: 'solid' as const, figure: '' })), newestCheckId: null, isTaut: true },
	surveys: [],
	checks: [],
	flags: [],
	pours: [aPour()],
	holdPoints: [],
	conditions: [],
	unseenHolds: [],
	uncheckedFits: [],
	drafts: [],
	invitations: null,
	holders: { 'owners-representative': ['R. Amadi'], 'project-engineer': ['Ida Roen'], 'site-engineer': ['Jo Marsh', 'T. Okoro'] },
	...over,
});
const point = { pourId: 'p7', kind: 'before-pour' as const, readyFrom: null, calledAt: now, submittedAt: at('2026-12-03T07:10:00Z') };
const next = (over: Partial<BoardFacts>) => boardOf(facts(over)).next.map(({ verb }) => verb);
const waiting = (over: Partial<BoardFacts>) => boardOf(facts(over)).waiting.map(({ who, what }) => `${who}: ${what}`);

describe('what waits for whom', () => {
	it('hands a hold point on: contractor, project engineer, owner’s representative; to all others it is one they wait on', () => {
		const turns = [
			['open', 'contractor', 'Call pour 7', 'Fennick Forms: call pour 7'],
			['called', 'project-engineer', 'Submit pour 7', 'Ida Roen: submit pour 7'],
			['submitted', 'owners-representative', 'Release pour 7', 'R. Amadi: release pour 7'],
		] as const;
		for (const [state, role, verb, others] of turns) {
			const holdPoints = [{ ...point, state }];
			const mine = { holdPoints, roles: [role], companyIds: ['fennick'] };
			expect(next(mine)).toContain(verb);
			expect(waiting(mine)).toEqual([]);
			expect(waiting({ holdPoints })).toEqual([others]);
			expect(next({ holdPoints })).toEqual([]);
		}
		expect(waiting({ holdPoints: [{ ...point, state: 'released' }] })).toEqual([]);
	});

	it('asks a contractor for its own flags alone, with its deadline, and the engineers for what is answered or too close', () => {
		const flags = [
			aFlag(),
			aFlag({ flagId: 'f2', companyId: 'oster', companyName: 'Oster Steel' }),
			aFlag({ flagId: 'f3', title: 'Column A/3', state: 'answered', answer: { kind: 'concession', why: 'thin' } }),
			aFlag({ flagId: 'f4', isWith: 'engineers', verdict: 'too-close-to-call' }),
		];
		const [act] = boardOf(facts({ roles: ['contractor'], companyIds: ['fennick'], flags })).next;
		expect(act).toEqual({ verb: 'Answer 1 flag', path: 'flags/f1', why: 'Column C/3.', by: at('2026-12-05T16:00:00Z'), isBefore: false });
		expect(next({ roles: ['project-engineer'], flags })).toEqual(['Decide 1 answer', 'Decide 1 open question']);
		const [decide] = boardOf(facts({ roles: ['project-engineer'], flags })).next;
		expect(decide).toMatchObject({ why: 'Column A/3: a concession asked.', by: at('2026-12-04T07:00:00Z'), isBefore: true });
		expect(waiting({ roles: ['project-engineer'], flags })).toEqual(['Fennick Forms: answer 1 flag', 'Oster Steel: answer 1 flag']);
		expect(next({ roles: ['project-engineer'], flags: [aFlag({ answerBy: at('2026-12-03T07:00:00Z') })] })).toContain(
			'Decide 1 flag unanswered',
		);
	});

	it('has work put right by its company, then measured by the site engineers, and concessions consented to by the owner', () => {
		const by = at('2026-12-04T12:00:00Z');
		const decided = aFlag({ state: 'decided', decision: { kind: 'rework', reason: 'r', by } });
		expect(boardOf(facts({ roles: ['contractor'], companyIds: ['fennick'], flags: [decided] })).next[0]).toMatchObject({
			verb: 'Put right 1 place',
			by,
		});
		expect(next({ roles: ['site-engineer'], flags: [aFlag({ state: 'put-right' })] })).toContain('Measure 1 place again');
		expect(waiting({ flags: [aFlag({ state: 'put-right' })] })).toEqual(['The site engineers: measure 1 place again']);
		expect(next({ roles: ['owners-representative'], flags: [aFlag({ state: 'decided', isConsentAwaited: true })] })).toEqual([
			'Say of 1 concession',
		]);
	});

	it('never asks who adopted a fit to be its second person', () => {
		const uncheckedFits = [{ fitId: 'x', number: 3, surveyId: 's', setupId: 'u', adoptedById: 'me', adoptedAt: now }];
		expect(next({ roles: ['site-engineer'], uncheckedFits })).not.toContain('Check fit 3');
		expect(next({ roles: ['site-engineer'], userId: 'other', uncheckedFits })).toContain('Check fit 3');
		expect(waiting({ roles: ['contractor'], uncheckedFits })).toEqual([]);
	});

	it('puts a hold before all, then the nearest deadline, and names at most five', () => {
		const pours = ['1', '2', '3', '4', '5', '6'].map((number, i) =>
			aPour({ pourId: `p${number}`, number, plannedAt: new Date(now.getTime() + (6 - i) * 3_600_000) }),
		);
		const holdPoints = pours.map(({ pourId }) => ({ ...point, pourId, state: 'submitted' as const }));
		const unseenHolds = [{ pourId: 'p1', reasons: ['Rev 5 moved a column.'], raisedAt: now }];
		expect(next({ roles: ['owners-representative'], pours, holdPoints, unseenHolds })).toEqual([
			'See the hold on pour 1',
			'Release pour 6',
			'Release pour 5',
			'Release pour 4',
			'Release pour 3',
		]);
	});

	it('shows invitations to who may see them', () => {
		const invitations = [{ email: 'new@example.com', sentAt: now }];
		expect(waiting({ roles: ['project-engineer'], invitations })).toEqual(['new@example.com: accept the invitation']);
	});
});
