import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Deviation, Verdict } from '#shared/check/check-schema.ts';
import type { CheckpointStanding, Measurement } from '#shared/check/standing.ts';
import { isAfterTheConcrete } from '#shared/pour/after-the-concrete.ts';
import { type PourCheckpoint, type ReadinessFacts, readinessOf } from '#shared/pour/readiness.ts';

function standing(verdict: Verdict, more: Partial<Measurement> = {}): CheckpointStanding {
	const deviationMm = verdict === 'not-measured' ? null : 3;
	const deviation = { checkpointId: 'top', characteristic: 'face', verdict, deviationMm } as unknown as Deviation;
	const newest = { isFitAdopted: true, isFitChecked: true, deviation, ...more } as Measurement;
	return { modelId: 'm', globalId: 'c3', checkpointId: 'top', newest, disagreement: null, trend: [newest], passedOver: [] };
}

function point(more: Partial<PourCheckpoint> = {}): PourCheckpoint {
	return {
		modelId: 'm',
		globalId: 'c3',
		checkpointId: 'top',
		characteristic: 'face',
		mark: 'C/3',
		requirement: 'required',
		isAfterConcrete: false,
		standing: standing('within'),
		isVoided: false,
		isLimitChanged: false,
		isDesignMoved: false,
		...more,
	};
}

const facts = (checkpoints: PourCheckpoint[], more: Partial<ReadinessFacts> = {}): ReadinessFacts => ({
	checkpoints,
	flags: [],
	goneMarks: [],
	isFitCheckedBySecond: true,
	...more,
});
const flag = (state: 'open' | 'closed', kind: 'face' | 'plan' = 'face') => ({ modelId: 'm', globalId: 'c3', kind, state });

describe('a pour is ready', () => {
	it('where every asked point is within, sampled ones too, on checked and adopted fits', () => {
		expect(readinessOf(facts([point(), point({ requirement: 'by-sample' })]))).toMatchObject({
			isReady: true,
			sentences: [{ text: '2 points within, on adopted fits.', isGood: true }],
		});
	});

	it.each([
		['not measured', { standing: null }],
		['not measured', { standing: standing('not-measured') }],
		['not measured', { requirement: 'by-sample', standing: null }],
		['moves or reshapes', { isDesignMoved: true }],
		['adopted no more', { standing: standing('within', { isFitAdopted: false }) }],
		['no second person', { standing: standing('within', { isFitChecked: false }) }],
		['voided', { isVoided: true }],
		['other limits', { isLimitChanged: true }],
		['no rule decides', { standing: standing('no-tolerance') }],
		['outside', { standing: standing('outside') }],
		['too close to call', { standing: standing('too-close-to-call') }],
		['not known', { standing: standing('undecided') }],
	] as [string, Partial<PourCheckpoint>][])('not where a point is: %s', (words, more) => {
		const { isReady, sentences } = readinessOf(facts([point(), point(more)]));
		expect(isReady).toBe(false);
		expect(sentences.filter(({ isGood }) => !isGood).map(({ text }) => text)).toEqual([expect.stringContaining(words)]);
		// Left out with a reason, the same point stands in nobody's way.
		expect(readinessOf(facts([point(), point({ ...more, requirement: 'left-out' })])).isReady).toBe(true);
	});

	it('by a closed flag of the same element and kind, not by an open one, nor by another kind’s', () => {
		const off = point({ standing: standing('outside') });
		expect(readinessOf(facts([off], { flags: [flag('closed')] })).isReady).toBe(true);
		expect(readinessOf(facts([off], { flags: [flag('open')] })).isReady).toBe(false);
		expect(readinessOf(facts([off], { flags: [flag('closed'), flag('open')] })).isReady).toBe(false);
		expect(readinessOf(facts([off], { flags: [flag('closed', 'plan')] })).isReady).toBe(false);
		expect(readinessOf(facts([point()], { flags: [flag('open')] })).isReady).toBe(false);
	});

	it('without a second person’s check only where the site asks for none', () => {
		const unchecked = point({ standing: standing('within', { isFitChecked: false }) });
		expect(readinessOf(facts([unchecked], { isFitCheckedBySecond: false })).isReady).toBe(true);
	});

	it('not with nothing to measure, nor with everything left out, nor with an element gone', () => {
		expect(readinessOf(facts([])).isReady).toBe(false);
		expect(readinessOf(facts([point({ requirement: 'left-out' })])).isReady).toBe(false);
		expect(readinessOf(facts([point({ requirement: 'left-out' }), point({ isAfterConcrete: true, standing: null })])).isReady).toBe(false);
		expect(readinessOf(facts([point()], { goneMarks: ['C/4'] }))).toMatchObject({
			isReady: false,
			sentences: [{ text: '1 element no longer in the newest revision (C/4).' }, {}],
		});
	});

	it('without what the concrete itself makes, and says so', () => {
		const top = point({ isAfterConcrete: true, standing: null });
		expect(readinessOf(facts([point(), top])).sentences).toMatchObject([
			{ text: '1 point within, on adopted fits.', isGood: true },
			{ text: "1 point not asked for here: the concrete's own tops are measured after it (C/3).", isGood: true },
		]);
		expect(readinessOf(facts([top]))).toMatchObject({
			isReady: true,
			sentences: [{ text: expect.stringContaining('list alone') }, {}],
		});
	});

	it('or not, the same whatever the order of the points, and never by one more point that is off', () => {
		const any = fc.record({
			requirement: fc.constantFrom('required' as const, 'by-sample' as const, 'left-out' as const),
			isAfterConcrete: fc.boolean(),
			isVoided: fc.boolean(),
			isLimitChanged: fc.boolean(),
			isDesignMoved: fc.boolean(),
			standing: fc.constantFrom(null, standing('within'), standing('outside'), standing('no-tolerance')),
		});
		fc.assert(
			fc.property(fc.array(any, { minLength: 1, maxLength: 12 }), (points) => {
				const all = points.map(point);
				const there = readinessOf(facts(all));
				expect(readinessOf(facts(all.toReversed()))).toEqual(there);
				expect(readinessOf(facts([...all, point({ standing: standing('outside') })])).isReady).toBe(false);
				// By brute force: each asked point is within and nothing of it changed.
				const asked = all.filter((one) => !one.isAfterConcrete);
				const counted = asked.filter((one) => one.requirement !== 'left-out');
				const isGood = counted.every(
					(one) => one.standing?.newest.deviation.verdict === 'within' && !one.isVoided && !one.isLimitChanged && !one.isDesignMoved,
				);
				expect(there.isReady).toBe(isGood && (asked.length === 0 || counted.length > 0));
			}),
		);
	});
});

describe('what the concrete itself makes', () => {
	const top = { characteristic: 'level', isSoffit: false, elementClass: 'IfcSlab' } as const;
	it('is an upward level of concrete, and is asked for after it alone', () => {
		expect(isAfterTheConcrete(top, 'before-pour')).toBe(true);
		expect(isAfterTheConcrete({ ...top, elementClass: 'IfcColumn' }, 'before-pour')).toBe(true);
		expect(isAfterTheConcrete(top, 'after-pour')).toBe(false);
	});
	it('is no soffit, no face, no plan position, and nothing set into the form', () => {
		expect(isAfterTheConcrete({ ...top, isSoffit: true }, 'before-pour')).toBe(false);
		for (const characteristic of ['face', 'plan'] as const)
			expect(isAfterTheConcrete({ ...top, characteristic }, 'before-pour')).toBe(false);
		for (const elementClass of ['IfcMechanicalFastener', 'IfcDiscreteAccessory', 'IfcPlate', 'IfcReinforcingBar', 'IfcTendon'])
			expect(isAfterTheConcrete({ ...top, elementClass }, 'before-pour')).toBe(false);
	});
});
