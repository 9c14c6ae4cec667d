import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { actOnFlag } from '#shared/flag/act-on-flag.ts';
import type { FlagAct, FlagActor, FlagFinding, FlagLife, FlagMoment } from '#shared/flag/flag-life.ts';
import type { FlagAnswer, FlagDecision } from '#shared/flag/flag-schema.ts';
import { maySeeFlag } from '#shared/flag/may-act.ts';
import { raiseFlag } from '#shared/flag/measured-again.ts';

const company = 'forms';
const hour = 3_600_000;

const people: Record<string, FlagActor> = {
	server: 'server',
	site: { roles: ['site-engineer'], companyIds: [] },
	project: { roles: ['project-engineer'], companyIds: [] },
	forms: { roles: ['contractor'], companyIds: [company] },
	steel: { roles: ['contractor'], companyIds: ['steel'] },
	owner: { roles: ['owners-representative'], companyIds: [] },
	observer: { roles: ['observer'], companyIds: [] },
};

/** Who may do what, written out by hand from the table of roles. */
const doers: Record<FlagAct['kind'], string[]> = {
	answer: ['forms'],
	'ask-time': ['forms'],
	'put-right': ['forms'],
	'grant-time': ['project'],
	decide: ['project'],
	consent: ['owner'],
	'measured-again': ['server'],
	lapse: ['server'],
};

const answers: FlagAnswer[] = [
	{ kind: 'put-right', means: 'rework', how: 'Grind.', by: new Date(1e12) },
	{ kind: 'concession', why: 'Cladding has 20 mm of play.' },
	{ kind: 'contest', why: 'Measured through rebar.', ownSurveyId: null },
];
const decisions: FlagDecision[] = [
	{ kind: 'rework', reason: 'Stair will not fit.', by: null },
	{ kind: 'repair', reason: 'Fill.', by: null },
	{ kind: 'reject-and-replace', reason: 'No.', by: null },
	{ kind: 'survey-again', reason: 'One shot only.', sigmaMm: 1 },
	{ kind: 'taken-as-measured', reason: 'Good enough.' },
	...[12, 60].map(
		(upToMm): FlagDecision => ({
			kind: 'concession',
			reason: 'No harm.',
			conditions: null,
			limits: { upToMm, extent: 'This face', number: 1, until: null, use: null },
		}),
	),
];

const finding = fc.record({
	checkId: fc.constantFrom('c1', 'c2', 'c3'),
	verdict: fc.constantFrom('within' as const, 'outside' as const, 'too-close-to-call' as const, 'undecided' as const),
	worstMm: fc.integer({ min: 0, max: 80 }),
	isInsideAlone: fc.boolean(),
});
const act: fc.Arbitrary<FlagAct> = fc.oneof(
	fc.record({ kind: fc.constant('answer' as const), answer: fc.constantFrom(...answers) }),
	fc.record({ kind: fc.constant('ask-time' as const), until: fc.integer({ min: 0, max: 500 }).map((n) => n * hour) }),
	fc.constant({ kind: 'grant-time' as const }),
	fc.record({ kind: fc.constant('decide' as const), decision: fc.constantFrom(...decisions) }),
	fc.record({ kind: fc.constant('consent' as const), isGiven: fc.boolean() }),
	fc.constant({ kind: 'put-right' as const }),
	fc.record({ kind: fc.constant('measured-again' as const), finding }),
	fc.record({
		kind: fc.constant('lapse' as const),
		because: fc.constantFrom('check-withdrawn' as const, 'element-gone' as const, 'limits-changed' as const),
	}),
);
const step = fc.record({
	who: fc.oneof({ weight: 3, arbitrary: fc.constant('whoever may') }, { weight: 1, arbitrary: fc.constantFrom(...Object.keys(people)) }),
	act: fc.oneof(
		{ weight: 12, arbitrary: act.filter(({ kind }) => kind !== 'lapse') },
		{ weight: 1, arbitrary: act.filter(({ kind }) => kind === 'lapse') },
	),
	hoursLater: fc.integer({ min: 0, max: 60 }),
});

const raisedBy = fc.record({
	first: finding.filter(({ verdict }) => verdict !== 'within'),
	companyId: fc.constantFrom(company, null),
	isConsentAsked: fc.boolean(),
});

/** Each step with the flag before and after it; a refused one leaves it as it was. */
function play(
	{ first, companyId, isConsentAsked }: { first: FlagFinding; companyId: string | null; isConsentAsked: boolean },
	steps: Step[],
) {
	let now = 1000 * hour;
	const momentAt = (): FlagMoment => ({ now, answerBy: now + 48 * hour, isConsentAsked });
	let flag = raiseFlag(first, companyId, momentAt())!;
	const story: { who: string; act: FlagAct; before: FlagLife; after: FlagLife; refusal: string | null; moment: FlagMoment }[] = [];
	for (const { who, act: done, hoursLater } of steps) {
		now += hoursLater * hour;
		const doer = who === 'whoever may' ? doers[done.kind][0]! : who;
		const moment = momentAt();
		const outcome = actOnFlag(flag, done, people[doer]!, moment);
		const after = outcome.ok ? outcome.flag : flag;
		story.push({ who: doer, act: done, before: flag, after, refusal: outcome.ok ? null : outcome.refusal.code, moment });
		flag = after;
	}
	return { flag, story };
}
type Step = { who: string; act: FlagAct; hoursLater: number };

/** Which act may lead from which state to which: the states of the rule book. */
const roads: Record<FlagAct['kind'], string[]> = {
	answer: ['open>answered', 'answered>answered'],
	'ask-time': ['open>open'],
	'grant-time': ['open>open'],
	decide: [
		'open>decided',
		'answered>decided',
		'decided>decided',
		'open>closed',
		'answered>closed',
		'decided>closed',
		'open>open',
		'decided>open',
	],
	consent: ['decided>closed', 'decided>answered', 'decided>open'],
	'put-right': ['decided>put-right'],
	'measured-again': [
		...['open', 'answered', 'decided', 'put-right', 'closed'].map((state) => `${state}>closed`),
		...['open', 'answered', 'decided', 'put-right', 'closed'].map((state) => `${state}>open`),
		'answered>answered',
		'decided>decided',
		'decided>answered',
	],
	lapse: ['open', 'answered', 'decided', 'put-right', 'closed'].map((state) => `${state}>lapsed`),
};

describe('a flag, whatever the people do', () => {
	const anyStory = fc.tuple(raisedBy, fc.array(step, { maxLength: 40 }));
	const everyStep = (look: (entry: ReturnType<typeof play>['story'][number]) => void) =>
		fc.assert(
			fc.property(anyStory, ([raised, steps]) => {
				for (const entry of play(raised, steps).story) look(entry);
			}),
			{ numRuns: 400 },
		);

	it('goes only the roads of the rule book', () => {
		everyStep(({ act: done, before, after, refusal }) => {
			if (refusal === null) expect(roads[done.kind]).toContain(`${before.state}>${after.state}`);
			else expect(after).toBe(before);
		});
	});

	it('is changed by nobody who may not', () => {
		everyStep(({ who, act: done, before, refusal }) => {
			const may = doers[done.kind].includes(who) || (who === 'site' && done.kind === 'decide' && done.decision.kind === 'survey-again');
			const isOwn = who !== 'forms' || before.companyId === company;
			expect(refusal === 'not-yours').toBe(!(may && isOwn));
		});
	});

	it('closes only on a check that is within, a concession, or taken as measured inside its limits: never by hand', () => {
		everyStep(({ act: done, before, after, moment }) => {
			expect(after.state === 'closed').toBe(after.closedOn !== null && after.state !== 'lapsed');
			if (before.state === 'closed' || after.state !== 'closed') return;
			if (after.closedOn === 'check-within') expect(done).toMatchObject({ kind: 'measured-again', finding: { verdict: 'within' } });
			else if (after.closedOn === 'taken-as-measured') expect([before.verdict === 'outside', before.isInsideAlone]).toEqual([false, true]);
			else {
				expect(after.decision?.kind).toBe('concession');
				if (moment.isConsentAsked) expect(done).toEqual({ kind: 'consent', isGiven: true });
			}
		});
	});

	it('is never left closed on a concession that its figures are beyond', () => {
		everyStep(({ after }) => {
			if (after.closedOn === 'concession' && after.state === 'closed' && after.decision?.kind === 'concession')
				expect(after.worstMm).toBeLessThanOrEqual(after.decision.limits.upToMm);
		});
	});

	it('lets an answer change until it is decided, and not after', () => {
		everyStep(({ act: done, before, refusal }) => {
			if (done.kind === 'answer' && refusal === null) expect(['open', 'answered']).toContain(before.state);
			if (done.kind === 'answer' && (before.state === 'decided' || before.state === 'put-right') && refusal !== 'not-yours')
				expect(refusal).toBe('already-decided');
		});
	});

	it('runs a clock for the contractor alone, and is decided without an answer only after it', () => {
		everyStep(({ act: done, before, after, refusal, moment }) => {
			if (after.isWith === 'engineers') expect(after.answerBy).toBeNull();
			if (after.state === 'answered') expect(after.answer).not.toBeNull();
			if (done.kind === 'decide' && refusal === null && before.state === 'open' && before.isWith === 'contractor') {
				if (done.decision.kind !== 'survey-again') expect(moment.now).toBeGreaterThan(before.answerBy!);
			}
			if (after.isDecidedWithoutAnswer) expect(after.answer).toBeNull();
		});
	});

	it('keeps what is too close to call from the contractor until the engineers have looked', () => {
		everyStep(({ before, act: done, refusal }) => {
			if (before.isWith === 'engineers' && done.kind === 'answer') expect(refusal).not.toBeNull();
			if (before.state === 'open' && before.verdict !== 'outside') expect(before.isWith).toBe('engineers');
		});
	});

	it('has lapsed for good', () => {
		everyStep(({ before, after }) => {
			if (before.state === 'lapsed') expect(after).toEqual(before);
		});
	});

	it('is told again, act by act, to where it stands', () => {
		fc.assert(
			fc.property(anyStory, ([raised, steps]) => {
				const { flag, story } = play(raised, steps);
				const [begin] = story;
				let told = begin?.before ?? flag;
				for (const { who, act: done, moment, refusal } of story) {
					if (refusal !== null) continue;
					const outcome = actOnFlag(told, done, people[who]!, moment);
					expect(outcome.ok).toBe(true);
					if (outcome.ok) told = outcome.flag;
				}
				expect(told).toEqual(flag);
			}),
		);
	});
});

describe('a flag’s usual ways', () => {
	const moment: FlagMoment = { now: 0, answerBy: 48 * hour, isConsentAsked: false };
	const outside: FlagFinding = { checkId: 'c1', verdict: 'outside', worstMm: 23, isInsideAlone: false };
	const must = (flag: FlagLife, done: FlagAct, who: string, over: Partial<FlagMoment> = {}): FlagLife => {
		const outcome = actOnFlag(flag, done, people[who]!, { ...moment, ...over });
		if (!outcome.ok) throw new Error(outcome.refusal.message);
		return outcome.flag;
	};

	it('put right: answered, decided, done, measured within', () => {
		let flag = raiseFlag(outside, company, moment)!;
		expect(flag).toMatchObject({ state: 'open', isWith: 'contractor', answerBy: 48 * hour });
		flag = must(flag, { kind: 'answer', answer: answers[0]! }, 'forms');
		flag = must(flag, { kind: 'decide', decision: decisions[0]! }, 'project');
		flag = must(flag, { kind: 'put-right' }, 'forms', { now: 5 });
		expect(flag).toMatchObject({ state: 'put-right', putRightAt: 5 });
		const still = must(flag, { kind: 'measured-again', finding: { ...outside, checkId: 'c2', worstMm: 14 } }, 'server');
		expect(still).toMatchObject({ state: 'open', round: 2, answer: null, decision: null });
		flag = must(flag, { kind: 'measured-again', finding: { ...outside, checkId: 'c2', verdict: 'within', worstMm: 4 } }, 'server');
		expect(flag).toMatchObject({ state: 'closed', closedOn: 'check-within', checkId: 'c2' });
	});

	it('conceded with the owner’s consent, and reopened by a survey beyond it', () => {
		let flag = raiseFlag(outside, company, moment)!;
		flag = must(flag, { kind: 'answer', answer: answers[1]! }, 'forms');
		expect(actOnFlag(flag, { kind: 'decide', decision: decisions[5]! }, people.project!, moment)).toMatchObject({
			ok: false,
			refusal: { code: 'below-measured' },
		});
		flag = must(flag, { kind: 'decide', decision: decisions[6]! }, 'project', { isConsentAsked: true });
		expect(flag).toMatchObject({ state: 'decided', isConsentAwaited: true });
		expect(must(flag, { kind: 'consent', isGiven: false }, 'owner')).toMatchObject({ state: 'answered', decision: null });
		flag = must(flag, { kind: 'consent', isGiven: true }, 'owner');
		expect(flag).toMatchObject({ state: 'closed', closedOn: 'concession' });
		const later = (worstMm: number) =>
			must(flag, { kind: 'measured-again', finding: { ...outside, checkId: 'c2', worstMm } }, 'server').state;
		expect([later(60), later(60.1)]).toEqual(['closed', 'open']);
	});

	it('too close to call: no clock, not the contractor’s, then outside by itself and it is', () => {
		const close: FlagFinding = { checkId: 'c1', verdict: 'too-close-to-call', worstMm: 11, isInsideAlone: false };
		const flag = raiseFlag(close, company, moment)!;
		expect(flag).toMatchObject({ isWith: 'engineers', answerBy: null });
		const taken: FlagAct = { kind: 'decide', decision: decisions[4]! };
		expect(must(flag, taken, 'project')).toMatchObject({ state: 'open', isWith: 'contractor', answerBy: 48 * hour, verdict: 'outside' });
		expect(must({ ...flag, isInsideAlone: true }, taken, 'project')).toMatchObject({ state: 'closed', closedOn: 'taken-as-measured' });
		expect(must(flag, { kind: 'decide', decision: decisions[3]! }, 'site')).toMatchObject({ state: 'decided' });
	});

	it('decided without an answer once the deadline has passed', () => {
		const flag = raiseFlag(outside, company, moment)!;
		const done: FlagAct = { kind: 'decide', decision: decisions[0]! };
		expect(actOnFlag(flag, done, people.project!, { ...moment, now: 48 * hour })).toMatchObject({ ok: false });
		expect(must(flag, done, 'project', { now: 48 * hour + 1 })).toMatchObject({ state: 'decided', isDecidedWithoutAnswer: true });
		const asked = must(flag, { kind: 'ask-time', until: 90 * hour }, 'forms');
		expect(must(asked, { kind: 'grant-time' }, 'project')).toMatchObject({ answerBy: 90 * hour, timeAsked: null });
	});

	it('is seen by its own company and by every other role', () => {
		const seen = (who: string, companyId: string | null) => maySeeFlag(people[who] as Exclude<FlagActor, 'server'>, { companyId });
		expect(['forms', 'steel', 'project', 'owner', 'observer'].map((who) => seen(who, company))).toEqual([true, false, true, true, true]);
		expect(seen('forms', null)).toBe(false);
	});
});
