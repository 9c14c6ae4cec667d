import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Role } from '#shared/permissions.ts';
import { actOnPour, holdPointKinds, type PourAct, type PourActor, type PourFacts, type PourLife } from '#shared/pour/pour-life.ts';

const fresh: PourLife = { state: 'planned', companyId: 'forms', points: { 'before-pour': 'open', 'after-pour': 'open' }, isHeld: false };
const people: { actor: PourActor; role: Role | 'server' }[] = [
	{ actor: 'server', role: 'server' },
	...(['site-engineer', 'project-engineer', 'owners-representative', 'observer'] as const).map((role) => ({
		actor: { userId: role, roles: [role], companyIds: [] },
		role,
	})),
	{ actor: { userId: 'lena', roles: ['contractor'], companyIds: ['forms'] }, role: 'contractor' },
	{ actor: { userId: 'other', roles: ['contractor'], companyIds: ['steel'] }, role: 'observer' },
	// Prepared what the pour rests on.
	{ actor: { userId: 'preparer', roles: ['owners-representative'], companyIds: [] }, role: 'observer' },
];
const point = fc.constantFrom(...holdPointKinds);
const act: fc.Arbitrary<PourAct> = fc.oneof(
	fc.record({
		kind: fc.constantFrom('call' as const, 'submit' as const, 'ask-more' as const, 'refuse' as const, 'withdraw' as const),
		point,
	}),
	fc.record({ kind: fc.constant('release' as const), point, conditionCount: fc.nat(2) }),
	fc.constantFrom<PourAct>({ kind: 'start-concreting' }, { kind: 'touch' }, { kind: 'see-hold' }),
	fc.record({ kind: fc.constant('end-concreting' as const), isWhole: fc.boolean() }),
);
const facts: fc.Arbitrary<PourFacts> = fc.record({
	isListAnswered: fc.boolean(),
	isReady: fc.boolean(),
	preparedBy: fc.constant([{ userId: 'preparer', what: 'adopted fit 3' }]),
});
const step = fc.record({ act, facts, person: fc.constantFrom(...people) });
/** Who may do what, written out by hand. */
const allowed: Record<PourAct['kind'], readonly string[]> = {
	call: ['contractor'],
	submit: ['project-engineer'],
	release: ['owners-representative'],
	'ask-more': ['owners-representative'],
	refuse: ['owners-representative'],
	withdraw: ['owners-representative'],
	'start-concreting': ['contractor'],
	'end-concreting': ['contractor'],
	touch: ['server'],
	'see-hold': ['site-engineer', 'project-engineer', 'owners-representative', 'observer', 'contractor'],
};
const isReleased = (life: PourLife) => life.points['before-pour'].startsWith('released');

describe('the life of a pour', () => {
	it('never breaks, over any acts of anybody in any order', () => {
		fc.assert(
			fc.property(fc.array(step, { maxLength: 60 }), (steps) => {
				let life = fresh;
				for (const { act: asked, facts: known, person } of steps) {
					const outcome = actOnPour(life, asked, person.actor, known);
					if (!outcome.ok) continue;
					const next = outcome.pour;
					const userId = person.actor === 'server' ? null : person.actor.userId;
					if (asked.kind !== 'see-hold') expect(allowed[asked.kind], `${asked.kind} by ${userId}`).toContain(person.role);
					if (asked.kind === 'release') {
						expect(known.isReady).toBe(true);
						expect(life.points[asked.point]).toBe('submitted');
						expect(userId).not.toBe('preparer');
					}
					if (asked.kind === 'submit') expect(known.isReady && known.isListAnswered).toBe(true);
					if (asked.kind === 'start-concreting') expect(isReleased(life) && !life.isHeld).toBe(true);
					// What becomes released was released by a signature, and by nothing else.
					for (const kind of holdPointKinds)
						if (next.points[kind].startsWith('released') && !life.points[kind].startsWith('released')) expect(asked.kind).toBe('release');
					// After the cast the release before the pour stands as it was signed.
					if (life.state === 'cast' || life.state === 'cast-in-part') {
						expect(next.points['before-pour']).toBe(life.points['before-pour']);
						expect(next.state).toBe(life.state);
						expect(next.isHeld).toBe(false);
					}
					if (next.points['after-pour'] !== life.points['after-pour']) expect(['cast', 'cast-in-part']).toContain(life.state);
					// A hold ends by a new release or by the end of the concrete alone.
					if (life.isHeld && !next.isHeld) expect(['release', 'end-concreting']).toContain(asked.kind);
					life = next;
				}
			}),
			{ numRuns: 2000 },
		);
	});

	it('holds a released pour that something touches, and lets nobody pour until it is released anew', () => {
		const contractor = people.find(({ role }) => role === 'contractor')!.actor;
		const owner = people.find(({ role }) => role === 'owners-representative')!.actor;
		const released: PourLife = { ...fresh, points: { ...fresh.points, 'before-pour': 'released' } };
		const good: PourFacts = { isListAnswered: true, isReady: true, preparedBy: [] };
		const held = actOnPour(released, { kind: 'touch' }, 'server', good);
		if (!held.ok) throw new Error('not held');
		expect(actOnPour(held.pour, { kind: 'start-concreting' }, contractor, good)).toMatchObject({ ok: false, refusal: { code: 'held' } });
		const engineer = people.find(({ role }) => role === 'project-engineer')!.actor;
		const submitted = actOnPour(held.pour, { kind: 'submit', point: 'before-pour' }, engineer, good);
		if (!submitted.ok) throw new Error('not submitted');
		expect(submitted.pour.isHeld).toBe(true);
		expect(actOnPour(submitted.pour, { kind: 'release', point: 'before-pour', conditionCount: 0 }, owner, good)).toMatchObject({
			ok: true,
			pour: { isHeld: false, points: { 'before-pour': 'released' } },
		});
	});
});
