import { describe, expect, it } from 'vitest';
import { whatChanged } from '#shared/pour/what-changed.ts';
import type { ShownPour } from '#shared/record/sealed-record.ts';
import { decisionBodyOf } from '../record/sample-records.ts';

const signed = decisionBodyOf(1, null).shown;
const now = (more: Partial<ShownPour>): ShownPour => ({ ...signed, ...more });

describe('what changed since a pour was signed last', () => {
	it('is nothing of the same', () => {
		expect(whatChanged(signed, structuredClone(signed))).toEqual([]);
	});

	it('names elements that came, went and moved', () => {
		const [first] = signed.elements;
		const other = { ...first!, globalId: 'c4', mark: 'C/4' };
		expect(whatChanged(signed, now({ elements: [...signed.elements, other] }))).toEqual(['1 element more: C/4.']);
		expect(whatChanged(now({ elements: [first!, other] }), signed)).toEqual(['1 element fewer: C/4.']);
		expect(whatChanged(signed, now({ elements: [{ ...first!, designSha256: 'f'.repeat(64) }] }))).toEqual([
			'1 element moved or reshaped by the design: C/3.',
		]);
	});

	it('says a verdict then and now, and counts what was measured again', () => {
		const [one, two] = signed.checkpoints;
		const worse = { ...one!, verdict: 'outside' as const, check: 5 };
		const again = { ...two!, check: 5 };
		expect(whatChanged(signed, now({ checkpoints: [worse, again] }))).toEqual([
			`${one!.label}: within then, outside now.`,
			'1 point measured again, judged as before.',
		]);
	});

	it('says what was left out since, what became of a flag, and what is answered otherwise', () => {
		const [point] = signed.checkpoints;
		const left = { modelId: point!.modelId, checkpointId: 'x', globalId: 'c3', label: 'C/3: north face', reason: 'hidden', by: 'Ida' };
		const flag = {
			flagId: '00000000-0000-4000-8000-000000000777',
			modelId: point!.modelId,
			globalId: 'c3',
			mark: 'C/3',
			characteristic: 'face',
			state: 'closed',
			outcome: 'closed on a concession',
			concession: null,
		};
		const list = [{ question: 'Forms clean?', answer: 'no' }];
		expect(whatChanged(signed, now({ leftOut: [left], flags: [flag], pour: { ...signed.pour, list } }))).toEqual([
			'1 point more left out: C/3: north face.',
			'Flag on C/3, face: closed on a concession.',
			'Forms clean? no.',
		]);
		expect(whatChanged(now({ leftOut: [left] }), signed)).toEqual(['1 point no longer left out: C/3: north face.']);
	});
});
