import { checkpointLimits } from '#shared/check/judge-deviation.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { classInWords } from '#shared/tolerance/element-words.ts';
import { matchPreparedRule, prepareRules } from '#shared/tolerance/match-rule.ts';
import type { Stage, ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';

/** A checkpoint that is to be measured, with the group it is counted in. */
export interface GroupedCheckpoint {
	name: string;
	/** Design frame, metres. */
	place: Vector3;
	/** Unit vector, design frame; null for plan, where the longer axis counts. */
	direction: Vector3 | null;
	/** Upper less lower limit, metres; twice the radius of a disc; null where there is none. */
	toleranceWidthM: number | null;
	group: string;
}

/** The model's checkpoints with the tolerance that the sheet sets for each at a stage. Left-out ones are not looked at. */
export function plannedCheckpoints(
	elements: readonly StoredElement[],
	checkpoints: readonly StoredCheckpoint[],
	sheet: ToleranceSheet | null,
	stage: Stage,
): GroupedCheckpoint[] {
	const byId = new Map(elements.map((element) => [element.elementId, element]));
	const rules = prepareRules(sheet?.rules ?? []);
	const widths = new Map<string, number | null>();
	return checkpoints.flatMap(({ elementId, characteristic, place, direction, label, requirement }): GroupedCheckpoint[] => {
		const element = byId.get(elementId);
		if (!element || requirement === 'left-out') return [];
		const key = `${elementId} ${characteristic}`;
		let width = widths.get(key);
		if (width === undefined) {
			const { class: ifcClass, storey, tag, mark, sizesM } = element;
			const matched = matchPreparedRule(rules, { class: ifcClass, characteristic, storey, tag, mark, stage, sizesM });
			const { limitsMm } = checkpointLimits(matched, sizesM, characteristic === 'plan', () => 0);
			width = widthOf(limitsMm, characteristic === 'plan');
			widths.set(key, width);
		}
		const group = `${classInWords(element.class)}, ${characteristic}`;
		return [
			{ name: `${element.title}, ${label}`, place, direction: directionOf(characteristic, direction), toleranceWidthM: width, group },
		];
	});
}

/** Upper less lower limit; of a disc twice its radius; metres. */
function widthOf(limitsMm: readonly [number | null, number | null] | null, isPlan: boolean): number | null {
	if (limitsMm === null) return null;
	const [lower, upper] = limitsMm;
	if (upper !== null && lower !== null) return (upper - lower) / 1000;
	return isPlan && upper !== null ? (2 * upper) / 1000 : null;
}

function directionOf(characteristic: string, direction: Vector3 | null): Vector3 | null {
	if (characteristic === 'plan') return null;
	return direction ?? [0, 0, 1];
}
