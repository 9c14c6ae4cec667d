import type { Checkpoint, Element, ModelReading } from '#shared/model/model-schema.ts';
import type { ReadingChoices } from '#shared/model/reading-choices.ts';

/** What the reader's child process and its parent say to each other. */

export const readIfcCodes = [
	'not-ifc',
	'cut-file',
	'unknown-schema',
	'unknown-unit',
	'no-elements',
	'too-large',
	'took-too-long',
	'too-much-memory',
	'crashed',
	'cancelled',
] as const;
export type ReadIfcCode = (typeof readIfcCodes)[number];

export type ReadIfcRequest = {
	path: string;
	glbPath: string;
	/** A small file the child keeps the number of the element it works on in (eight bytes, a double; 0 between), for when it no longer answers. */
	atPath: string;
	/** Elements whose geometry is not asked for, with the reason. */
	leaveOut: { entityNumber: number; why: string }[];
	choices: ReadingChoices;
};

export type ReadIfcReply =
	| { kind: 'progress'; doing: string; done: number; of: number }
	/** Long lists come in pieces before the result. */
	| { kind: 'elements'; elements: Element[] }
	| { kind: 'checkpoints'; checkpoints: Checkpoint[] }
	| { kind: 'result'; reading: Omit<ModelReading, 'elements' | 'checkpoints'>; glbPath: string; hasPicture: boolean }
	/** The geometry engine is broken for good by one element; a new process is needed. */
	| { kind: 'broken-by'; entityNumber: number }
	| { kind: 'refused'; code: ReadIfcCode; message: string };
