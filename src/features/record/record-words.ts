import type { RecordLine } from '#shared/record/contract.ts';

const words: Record<RecordLine['act'], string> = {
	released: 'Released',
	'released-with-conditions': 'Released with conditions',
	refused: 'Refused',
	withdrawn: 'Withdrawn',
};

/** "Released", "Withdrawn". */
export function actWords(act: RecordLine['act']): string {
	return words[act];
}

/** "before the pour", "as cast". */
export function holdPointWords(kind: RecordLine['holdPoint']): string {
	return kind === 'before-pour' ? 'before the pour' : 'after the pour, as cast';
}

/** A hash in groups of eight, so that two people can read it to each other. */
export function hashGroups(sha256: string): string {
	return sha256.replaceAll(/(.{8})(?=.)/g, '$1 ');
}
