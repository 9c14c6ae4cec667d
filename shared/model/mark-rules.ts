import { z } from 'zod';
import { pointNameKey } from '../survey/point-name.ts';

/** What a field controller takes for a point's name. */
export const longestMark = 16;

/** A name for an element as a person types it: letters, figures, blank, - _ / between them, at most sixteen. A dot begins a checkpoint's own part. */
export const newMark = z
	.string()
	.trim()
	.min(1, 'Say a name.')
	.max(longestMark, `At most ${longestMark} characters: a field controller takes no more.`)
	.regex(/^[\p{L}\p{N}](?:[\p{L}\p{N} /_-]*[\p{L}\p{N}])?$/u, 'Letters and figures, with blank, - _ or / between them.');

/** An element's name and those of its checkpoints: "C3-G" with "C3-G.E3", "C3-G.T". */
export interface NamedElement {
	readonly elementId: string;
	readonly mark: string;
	readonly checkpointMarks: readonly string[];
}

/** A checkpoint's own part of its mark, dot and all: ".E3"; the whole, where it does not begin with its element's. */
export function markEnd(elementMark: string, checkpointMark: string): string {
	return checkpointMark.startsWith(`${elementMark}.`) ? checkpointMark.slice(elementMark.length) : checkpointMark;
}

/**
 * Why new names cannot be given, as a sentence with the element it speaks of; null where all can. `wanted`: element id → name. A name must be
 * the only one of its spelling among the names of all elements and checkpoints as they will be, and leave room for its checkpoints' own parts.
 */
export function whyNotNamed(
	elements: readonly NamedElement[],
	wanted: ReadonlyMap<string, string>,
): { elementId: string; message: string } | null {
	const keys = new Map<string, { elementId: string; mark: string }>();
	for (const { elementId, mark: before, checkpointMarks } of elements) {
		const mark = wanted.get(elementId) ?? before;
		const isNew = mark !== before;
		for (const name of [mark, ...checkpointMarks.map((own) => (isNew ? mark + markEnd(before, own) : own))]) {
			if (isNew && name.length > longestMark) {
				const room = longestMark - (name.length - mark.length);
				return {
					elementId,
					message: `"${mark}" has a checkpoint "${name}" with ${name.length} characters; the field takes ${longestMark}. This element’s name may have ${room}.`,
				};
			}
			const key = pointNameKey(name);
			const other = keys.get(key);
			if (other !== undefined && other.elementId !== elementId && (isNew || wanted.has(other.elementId)))
				return {
					elementId: isNew ? elementId : other.elementId,
					message:
						other.mark === name
							? `"${name}" is the mark of another already.`
							: `"${name}" and "${other.mark}" would be taken for one another.`,
				};
			keys.set(key, { elementId, mark: name });
		}
	}
	return null;
}
