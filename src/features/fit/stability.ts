import { compareEpochs, type EpochComparison, type TwiceMeasured } from '#shared/fit/compare-epochs.ts';
import type { FitDetail } from '#shared/fit/contract.ts';
import type { FitRefusal } from '#shared/fit/fit-schema.ts';
import { isLevelled } from '#shared/fit/least-pairs.ts';
import { curedPairs } from '#shared/fit/shelved-input.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';

/** A mark at two times: how far it moved in the design's axes, mm. */
export interface MarkMovement {
	name: string;
	/** Null where no group of marks says which of them moved. */
	isStable: boolean | null;
	movementMm: [number, number, number] | null;
	standardised: number | null;
}

export interface StabilityTest {
	comparison: EpochComparison;
	marks: MarkMovement[];
}

/** Marks that two fits' set-ups both sighted, each in its own survey frame; also those set aside, since what moved is set aside first. */
export function markedTwice(before: FitDetail, after: FitDetail): TwiceMeasured[] {
	const later = new Map(sightings(after).map((sighting) => [sighting.name, sighting]));
	return sightings(before).flatMap(({ name, place, sigma }): TwiceMeasured[] => {
		const again = later.get(name);
		return again ? [{ name, before: place, after: again.place, beforeSigma: sigma, afterSigma: again.sigma }] : [];
	});
}

/** Sightings under the labels that the fit took them for, with σ and whole. */
function sightings(fit: FitDetail): { name: string; place: Vector3; sigma: Vector3 }[] {
	const whole = fit.shelves.map(({ use: _, ...shelving }) => shelving);
	return curedPairs(fit.pairs.pairs, fit.kind, whole).flatMap(({ pair: { name, survey, surveySigma } }) => {
		const [x, y, z] = survey;
		return x === null || y === null || z === null || !surveySigma ? [] : [{ name, place: [x, y, z] as const, sigma: surveySigma }];
	});
}

/** Did marks move between two fits? Tested between the sightings alone, so errors of the control list do not matter. */
export function testStability(before: FitDetail, after: FitDetail): { ok: true; test: StabilityTest } | { ok: false; refusal: FitRefusal } {
	const marks = markedTwice(before, after);
	const kinds = [before.kind, after.kind];
	const kind = kinds.includes('height') ? 'height' : kinds.every(isLevelled) ? 'levelled' : 'free';
	if (marks.length === 0)
		return {
			ok: false,
			refusal: { code: 'too-few-pairs', message: 'The two have no mark in common that both sighted with a standard deviation.' },
		};
	const compared = compareEpochs(kind, marks);
	if (!compared.ok) return compared;
	const { rotation } = before.result;
	const turned = ([x, y, z]: readonly [number, number, number]): [number, number, number] => {
		const [east, north, height] = rotation.map((row) => 1000 * (row[0] * x + row[1] * y + row[2] * z));
		return [east ?? 0, north ?? 0, height ?? 0];
	};
	return {
		ok: true,
		test: {
			comparison: compared.comparison,
			marks: compared.comparison.marks.map(({ name, stable, movement, standardised }) => ({
				name,
				isStable: stable,
				movementMm: movement && turned(movement),
				standardised,
			})),
		},
	};
}
