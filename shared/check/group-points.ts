import { pointNameKey } from '../survey/point-name.ts';
import type { CheckInputPoint, UnmatchedPoint } from './check-input.ts';
import { type Observation, observe, type PreparedSetup } from './observation.ts';

/** Points of one name in one set-up are one observation where they lie within the reach of each other. */
export function groupPoints(
	points: readonly CheckInputPoint[],
	setups: ReadonlyMap<string, PreparedSetup>,
	reachM: number,
	unmatched: UnmatchedPoint[],
): Observation[] {
	const groups = new Map<string, { key: string; setup: PreparedSetup; points: CheckInputPoint[] }>();
	let unnamed = 0;
	for (const point of points) {
		if (point.voided === true) continue;
		const setup = setups.get(point.setupId);
		if (setup === undefined) {
			unmatched.push({ name: point.name, setupId: point.setupId, reason: 'its set-up has no fit' });
			continue;
		}
		if (!point.surveyPoint.every(Number.isFinite)) {
			unmatched.push({ name: point.name, setupId: point.setupId, reason: 'it has no coordinates' });
			continue;
		}
		const key = pointNameKey(point.name);
		const groupKey = key === '' ? `\n${unnamed++}` : `${point.setupId}\n${key}`;
		const group = groups.get(groupKey);
		if (group) group.points.push(point);
		else groups.set(groupKey, { key, setup, points: [point] });
	}
	const observations: Observation[] = [];
	for (const { key, setup, points: repeats } of groups.values()) {
		const first = repeats[0]!.surveyPoint;
		const isOnePlace = repeats.every(({ surveyPoint: [x, y, z] }) => Math.hypot(x - first[0], y - first[1], z - first[2]) <= reachM);
		if (isOnePlace) observations.push(observe(repeats, key, setup));
		else for (const point of repeats) observations.push(observe([point], key, setup));
	}
	return observations;
}
