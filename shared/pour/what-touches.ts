import { counted, nameList } from '../check/name-list.ts';
import type { ShownPour } from '../record/sealed-record.ts';

/** What became of the things that a signed pour rests on. */
export interface EndedInputs {
	/** Numbers of its checks that were withdrawn since. */
	readonly withdrawnChecks: readonly number[];
	/** Numbers of its fits that are adopted no more. */
	readonly supersededFits: readonly number[];
}

/**
 * What touches a pour that was signed, as sentences; none: it stands. Only what is its own: its elements' shape or place, a fit, a check or a
 * limit it uses, a flag of its own opened again. All else is newer and changes nothing of it.
 */
export function whatTouches(signed: ShownPour, present: ShownPour, ended: EndedInputs): string[] {
	const now = new Map(present.elements.map((element) => [`${element.modelId} ${element.globalId}`, element]));
	const gone = signed.elements.filter(({ modelId, globalId }) => !now.has(`${modelId} ${globalId}`));
	const moved = signed.elements.filter(({ modelId, globalId, designSha256 }) => {
		const present = now.get(`${modelId} ${globalId}`);
		return present !== undefined && present.designSha256 !== designSha256;
	});
	const marksOf = (elements: ShownPour['elements']) => nameList(elements.map(({ mark, title }) => mark || title));
	return [
		...(gone.length > 0 ? [`${counted(gone.length, 'element')} of it is no longer in the design: ${marksOf(gone)}.`] : []),
		...(moved.length > 0 ? [`The newest revision moves or reshapes ${counted(moved.length, 'element')} of it: ${marksOf(moved)}.`] : []),
		...ended.withdrawnChecks.map((number) => `Check ${number}, which it rests on, was withdrawn.`),
		...ended.supersededFits.map((number) => `Fit ${number}, which it rests on, is adopted no more.`),
		...(present.isReady ? [] : present.readiness.filter((sentence) => !signed.readiness.includes(sentence))),
	];
}
