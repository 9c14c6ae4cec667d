import { describe, expect, it } from 'vitest';
import { whatTouches } from '#shared/pour/what-touches.ts';
import type { ShownPour } from '#shared/record/sealed-record.ts';
import { decisionBodyOf } from '../record/sample-records.ts';

const signed = decisionBodyOf(1, null).shown;
const [element] = signed.elements as [ShownPour['elements'][number]];
const nothing = { withdrawnChecks: [], supersededFits: [] };
const now = (more: Partial<ShownPour>): ShownPour => ({ ...signed, ...more });

describe('what touches a signed pour', () => {
	it('is nothing where nothing of its own changed, whatever else is newer', () => {
		expect(whatTouches(signed, signed, nothing)).toEqual([]);
		const newer = now({ carriedOver: ['rev 9 changes none of it.'], readiness: ['3 points within, on adopted fits.'] });
		expect(whatTouches(signed, newer, nothing)).toEqual([]);
		// A mark or a storey is a name: it changes no concrete.
		expect(whatTouches(signed, now({ elements: signed.elements.map((one) => ({ ...one, mark: 'new', storey: 'new' })) }), nothing)).toEqual(
			[],
		);
	});

	it('is an element that is gone, moved or reshaped, named', () => {
		expect(whatTouches(signed, now({ elements: signed.elements.slice(1) }), nothing)).toEqual([
			`1 element of it is no longer in the design: ${element.mark}.`,
		]);
		const moved = signed.elements.map((one, index) => (index === 0 ? { ...one, designSha256: 'b'.repeat(64) } : one));
		expect(whatTouches(signed, now({ elements: moved }), nothing)).toEqual([
			`The newest revision moves or reshapes 1 element of it: ${element.mark}.`,
		]);
	});

	it('is not the same GlobalId in another model', () => {
		const other = signed.elements.map((one) => ({ ...one, modelId: '00000000-0000-4000-8000-000000000999' }));
		expect(whatTouches(signed, now({ elements: other }), nothing)[0]).toContain('no longer in the design');
	});

	it('is a check that was withdrawn, a fit that is adopted no more', () => {
		expect(whatTouches(signed, signed, { withdrawnChecks: [4], supersededFits: [2] })).toEqual([
			'Check 4, which it rests on, was withdrawn.',
			'Fit 2, which it rests on, is adopted no more.',
		]);
	});

	it('is whatever makes it no longer ready, said once, without what was said when it was signed', () => {
		const off = '1 point outside, their flags not closed (C/3).';
		const later = now({ isReady: false, readiness: [...signed.readiness, off] });
		expect(whatTouches(signed, later, nothing)).toEqual([off]);
	});
});
