import { z } from 'zod';
import { type CheckpointDensity, checkpointDensity, defaultCheckpointDensity } from '../site/site-settings.ts';

/** What people say before a file is read. A reading keeps what it was read with; to change it takes the next reading. */

export type Spacing = Pick<CheckpointDensity, 'faceSpacingM' | 'levelSpacingM'>;

/** Which of two readings of a map conversion's scale holds. */
export const mapScaleReadings = ['as-written', 'by-units'] as const;
export const mapScaleReading = z.enum(mapScaleReadings);
export type MapScaleReading = z.infer<typeof mapScaleReading>;

/** An axis named through two picked points, plan, design frame, metres. */
export const pickedAxis = z.object({
	tag: z.string(),
	from: z.tuple([z.number(), z.number()]),
	to: z.tuple([z.number(), z.number()]),
});
export type PickedAxis = z.infer<typeof pickedAxis>;

export const readingChoices = z.object({
	/** How close checkpoints lie, and which kinds; a person's own stay whatever their kind. */
	placing: checkpointDensity,
	/** A length unit chosen by a person where the file names two or none, metres per unit; null: as the file says. */
	metresPerUnit: z.number().positive().nullable(),
	mapScale: mapScaleReading.nullable(),
	/** Used where the file has no IfcGrid. */
	axes: z.array(pickedAxis),
	/** GlobalIds of the file that stand for an element known under another: new → known. */
	knownAs: z.record(z.string(), z.string()),
});
export type ReadingChoices = z.infer<typeof readingChoices>;

/** Nothing said. */
export const noChoices: ReadingChoices = { placing: defaultCheckpointDensity, metresPerUnit: null, mapScale: null, axes: [], knownAs: {} };

/** Whether a file would be read otherwise than it was. A reading of before anything could be said was read as if nothing was. */
export function isReadAnew(before: ReadingChoices | undefined, now: ReadingChoices): boolean {
	const flat = ({ placing, metresPerUnit, mapScale, axes, knownAs }: ReadingChoices): string =>
		JSON.stringify([
			[placing.faceSpacingM, placing.levelSpacingM, placing.kinds.plan, placing.kinds.face, placing.kinds.level],
			metresPerUnit,
			mapScale,
			axes.map(({ tag, from, to }) => [tag, from, to]),
			Object.entries(knownAs).sort(([one], [other]) => (one < other ? -1 : 1)),
		]);
	return flat(before ?? noChoices) !== flat(now);
}
