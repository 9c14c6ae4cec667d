import type { Finding } from '../fit/fit-schema.ts';
import type { Vector3 } from '../geometry/frame.ts';
import type { CheckInput } from './check-input.ts';
import { directionWords } from './direction-words.ts';
import type { Meetings } from './meet-checkpoints.ts';
import { counted, nameList } from './name-list.ts';

/** At most so many names travel with a finding; the evidence has the count. */
const mostNames = 200;

/** Findings about what met what: nothing in reach, two in reach, names far from their marks, and the units or the shift that would explain it. */
export function meetingFindings(input: CheckInput, meetings: Meetings, reachM: number): Finding[] {
	const findings: Finding[] = [];
	const cause = unitFinding(input, meetings) ?? frameFinding(input, meetings, reachM);
	if (cause !== null) findings.push(cause);
	const { outOfReach, nothingInReach, ambiguous } = meetings;
	if (outOfReach.length > 0 && cause === null) {
		const names = outOfReach.map(({ observation }) => observation.name);
		findings.push({
			code: 'far-from-its-mark',
			pairs: names.slice(0, mostNames),
			message: `${counted(names.length, 'point is', 'points are')} named for a checkpoint but measured further than ${reachM} m from it: ${nameList(names)}. A wrong name, or another place.`,
			evidence: {
				count: names.length,
				reachM,
				metres: outOfReach
					.slice(0, mostNames)
					.map(({ observation, checkpoint }) => distance(observation.carried, input.checkpoints[checkpoint]!.place)),
			},
		});
	}
	if (nothingInReach.length > 0) {
		const names = nothingInReach.map(({ name }) => name);
		findings.push({
			code: 'nothing-in-reach',
			pairs: names.slice(0, mostNames),
			message: `${counted(names.length, 'point has', 'points have')} no checkpoint within ${reachM} m: ${nameList(names)}.`,
			evidence: { count: names.length, reachM },
		});
	}
	if (ambiguous.length > 0) {
		const names = ambiguous.map(({ observation }) => observation.name);
		findings.push({
			code: 'two-in-reach',
			pairs: names.slice(0, mostNames),
			message: `${counted(names.length, 'point')} could be meant for more than one checkpoint, so none was taken: ${nameList(names)}. Name ${names.length === 1 ? 'it' : 'them'} by mark.`,
			evidence: {
				count: names.length,
				candidates: ambiguous.slice(0, mostNames).map(({ observation, checkpoints }) => ({
					point: observation.name,
					checkpoints: checkpoints.map((index) => input.checkpoints[index]!.id),
				})),
			},
		});
	}
	return findings;
}

function distance(a: Vector3, b: Vector3): number {
	return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

function centroid(points: readonly Vector3[]): Vector3 {
	const first = points[0]!;
	return [0, 1, 2].map(
		(axis) => first[axis]! + points.reduce((sum, point) => sum + (point[axis]! - first[axis]!), 0) / points.length,
	) as unknown as Vector3;
}

function spread(points: readonly Vector3[]): number {
	const middle = centroid(points);
	return Math.sqrt(points.reduce((sum, point) => sum + distance(point, middle) ** 2, 0) / points.length);
}

const metresOf: Readonly<Record<string, number>> = { mm: 0.001, cm: 0.01, in: 0.0254, ft: 0.3048, m: 1 };

/** The two units whose ratio this is, as what the figures are in and what they were read as; null where it is none, or one. */
function unitsOfRatio(ratio: number, tolerance: number): { from: string; to: string } | null {
	for (const unit of ['mm', 'cm', 'in', 'ft']) {
		if (Math.abs(ratio * metresOf[unit]! - 1) < tolerance) return { from: unit, to: 'm' };
		if (Math.abs(ratio / metresOf[unit]! - 1) < tolerance) return { from: 'm', to: unit };
	}
	return null;
}

/** Whether the points' extent stands to that of the design as one unit to another: by names where there are three, else by the whole (coarser). */
function unitFinding(input: CheckInput, { outOfReach, nothingInReach, met }: Meetings): Finding | null {
	const isByName = outOfReach.length >= 3;
	if (!isByName && (met.size > 0 || nothingInReach.length < 5 || input.checkpoints.length < 5)) return null;
	const measured = isByName ? outOfReach.map(({ observation }) => observation.carried) : nothingInReach.map(({ carried }) => carried);
	const design = isByName
		? outOfReach.map(({ checkpoint }) => input.checkpoints[checkpoint]!.place)
		: input.checkpoints.map(({ place }) => place);
	const designSpread = spread(design);
	if (!(designSpread > 0.1)) return null;
	const ratio = spread(measured) / designSpread;
	const units = unitsOfRatio(ratio, isByName ? 0.02 : 0.2);
	if (units === null) return null;
	return {
		code: 'units',
		pairs: [],
		message: `The points spread ${ratio.toPrecision(3)} times as far as the design: their coordinates look like ${units.from} read as ${units.to}.`,
		evidence: { ...units, ratio, byName: isByName },
	};
}

/** Whether all points named for checkpoints lie beside them by the same way, further than the reach: another frame, a wrong fit. */
function frameFinding(input: CheckInput, { outOfReach }: Meetings, reachM: number): Finding | null {
	if (outOfReach.length < 3) return null;
	const differences = outOfReach.map(({ observation, checkpoint }): Vector3 => {
		const { place } = input.checkpoints[checkpoint]!;
		return [observation.carried[0] - place[0], observation.carried[1] - place[1], observation.carried[2] - place[2]];
	});
	const middle = centroid(differences);
	if (spread(differences) > reachM) return null;
	return {
		code: 'common-shift',
		pairs: [],
		message: `All ${outOfReach.length} points named for checkpoints out of reach lie the same way off: ${directionWords([middle[0] * 1000, middle[1] * 1000], 0)}, ${Math.abs(middle[2] * 1000).toFixed(0)} ${middle[2] < 0 ? 'low' : 'high'} (mm). Another frame or a wrong fit.`,
		evidence: { eastMm: middle[0] * 1000, northMm: middle[1] * 1000, heightMm: middle[2] * 1000, count: outOfReach.length },
	};
}
