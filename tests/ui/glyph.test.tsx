/** @vitest-environment jsdom */
import { render } from '@testing-library/react';
import { describe, expect, it } from 'vitest';
import { Glyph, GlyphMark } from '#src/ui/glyph.tsx';
import { glyphKindOf, glyphKinds, type JudgedValue, planTurnRad } from '#src/ui/glyph-kind.ts';

const onFace = (over: Partial<JudgedValue>): JudgedValue => ({
	verdict: 'outside',
	characteristic: 'face',
	deviationMm: 16,
	limitsMm: [-10, 10],
	...over,
});

describe('which glyph', () => {
	it.each([
		['proud above the upper limit', onFace({}), 'proud'],
		['shy below the lower limit', onFace({ deviationMm: -16 }), 'shy'],
		['shy below a lower limit that is above zero', onFace({ deviationMm: 1, limitsMm: [2, 12] }), 'shy'],
		['proud above an upper limit that is below zero', onFace({ deviationMm: -1, limitsMm: [-12, -2] }), 'proud'],
		['an arrow in plan', onFace({ characteristic: 'plan', limitsMm: [null, 10] }), 'plan'],
		['a diamond when too close to call', onFace({ verdict: 'too-close-to-call' }), 'close'],
		['a diamond when undecided', onFace({ verdict: 'undecided' }), 'close'],
		['a ring within, in plan too', onFace({ verdict: 'within', characteristic: 'plan' }), 'within'],
		['a dash when not measured', onFace({ verdict: 'not-measured', deviationMm: null }), 'none'],
		['a dash without a tolerance', onFace({ verdict: 'no-tolerance', limitsMm: null }), 'none'],
	] as const)('%s', (_, value, kind) => {
		expect(glyphKindOf(value)).toBe(kind);
	});
});

describe('the drawn glyph', () => {
	it('has a form of its own for every kind', () => {
		const forms = glyphKinds.map((kind) => {
			const { container } = render(<Glyph kind={kind} />);
			return [...container.querySelectorAll('circle, path')].map((node) => node.getAttribute('d') ?? 'ring').join();
		});
		expect(new Set(forms).size).toBe(glyphKinds.length);
	});

	it('turns the plan arrow as on the plan: north is up the screen, where y counts down', () => {
		const { container } = render(
			<svg role="img" aria-label="north">
				<GlyphMark kind="plan" x={0} y={0} turnRad={planTurnRad([0, 5])} />
			</svg>,
		);
		expect(container.querySelector('g')?.getAttribute('transform')).toContain('rotate(-90)');
		expect(planTurnRad([-3, 0])).toBeCloseTo(Math.PI, 12);
		expect(planTurnRad(null)).toBe(0);
	});

	it('is silent beside its word and says its label alone', () => {
		const silent = render(<Glyph kind="proud" />);
		expect(silent.container.querySelector('svg')?.getAttribute('aria-hidden')).toBe('true');
		const said = render(<Glyph kind="proud" label="outside, proud" />);
		expect(said.getByRole('img', { name: 'outside, proud' })).toBeTruthy();
	});
});
