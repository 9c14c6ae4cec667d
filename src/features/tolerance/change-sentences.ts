import type { SheetWeight } from '#shared/tolerance/contract.ts';
import { limitsMm, signedMm } from '#src/lib/format.ts';

type ChangeGroup = SheetWeight['changes'][number];

const named = 6;

/** "4 outside become within: C/3 +16, was ±10, now ±20; …": one sentence for all verdicts that change alike. Millimetres. */
export function changeSentence({ was, is, count, first }: ChangeGroup): string {
	const examples = first.slice(0, named).map(({ mark, characteristic, deviationMm, wasMm, isMm }) => {
		const isPlan = characteristic === 'plan';
		return `${mark} ${signedMm(deviationMm)}, was ${limitsWords(wasMm, isPlan)}, now ${limitsWords(isMm, isPlan)}`;
	});
	const more = count > examples.length ? `; and ${count - examples.length} more` : '';
	return `${count} ${words(was)} ${count === 1 ? 'becomes' : 'become'} ${words(is)}: ${examples.join('; ')}${more}.`;
}

function limitsWords(limits: ChangeGroup['first'][number]['wasMm'], isPlan: boolean): string {
	if (limits !== null && limits[1] !== null && limits[0] === -limits[1]) return `±${limits[1]}`;
	return limitsMm(limits, isPlan && limits?.[0] === null);
}

const words = (verdict: string): string => verdict.replaceAll('-', ' ');
