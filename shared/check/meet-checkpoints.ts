import { characteristicOfCode, isControlCode, splitCharacteristic } from './characteristic-words.ts';
import type { CheckInput, CheckInputCheckpoint, UnmatchedPoint } from './check-input.ts';
import { placeGrid } from './checkpoint-grid.ts';
import { checkpointNames } from './checkpoint-names.ts';
import { isWithinReach, meet, whyOutOfReach } from './checkpoint-reach.ts';
import { isOneShot, nearestFace } from './choose-checkpoint.ts';
import { groupPoints } from './group-points.ts';
import type { Observation, PreparedSetup } from './observation.ts';

/** What the points of a survey meet, and what they do not. Indices are those of the checkpoints given. */
export interface Meetings {
	/** Per checkpoint: what met it, by name before by nearness; may be more than one, from several set-ups. */
	readonly met: Map<number, Observation[]>;
	/** Per checkpoint: why what was named for it did not meet it. */
	readonly refused: Map<number, string>;
	readonly unmatched: UnmatchedPoint[];
	/** Observations that several checkpoints could be meant by, with those. */
	readonly ambiguous: { observation: Observation; checkpoints: readonly number[] }[];
	/** Observations named for a checkpoint but out of its reach. */
	readonly outOfReach: { observation: Observation; checkpoint: number }[];
	/** Observations that met nothing by name or nearness. */
	readonly nothingInReach: Observation[];
}

/**
 * Which survey point meets which checkpoint. First by id or mark, in any spelling that DOMAIN.md lets count as the same; else by being the only
 * checkpoint within reach. Where several could be meant none is taken: that is a finding, and a person says which.
 */
export function meetCheckpoints(
	input: CheckInput,
	setups: ReadonlyMap<string, PreparedSetup>,
	reachM: number,
	onPoint: (done: number, of: number) => void,
): Meetings {
	const { checkpoints } = input;
	const meetings: Meetings = { met: new Map(), refused: new Map(), unmatched: [], ambiguous: [], outOfReach: [], nothingInReach: [] };
	const observations = groupPoints(input.points, setups, reachM, meetings.unmatched);
	const { byId, byMark } = checkpointNames(input);
	const metByNearness = new Map<number, { observation: Observation; asideM: number }[]>();
	const grid = placeGrid(
		checkpoints.map(({ place }) => place),
		reachM * Math.SQRT2 * (1 + 1e-9),
	);
	const leave = (observation: Observation, reason: string): void => {
		meetings.unmatched.push({ name: observation.name, setupId: observation.setup.setup.id, reason });
	};
	const inReach = (index: number, observation: Observation, isByName: boolean): string | null => {
		const checkpoint = checkpoints[index]!;
		if (observation.setup.isHeightsOnly)
			return checkpoint.characteristic === 'level' ? heightOnlyReach(checkpoint, observation, reachM) : 'a level run gives heights alone';
		return whyOutOfReach(checkpoint, meet(checkpoint, observation.carried, observation.offsetMm), reachM, isByName);
	};

	const meetByName = (observation: Observation, named: readonly number[]): void => {
		const reachable = named.filter((index) => inReach(index, observation, true) === null);
		if (reachable.length === 0) {
			const nearest = [...named].sort((a, b) => distanceTo(checkpoints[a]!, observation) - distanceTo(checkpoints[b]!, observation))[0]!;
			const reason = inReach(nearest, observation, true)!;
			for (const index of named) meetings.refused.set(index, `${observation.name}: ${inReach(index, observation, true)}`);
			meetings.outOfReach.push({ observation, checkpoint: nearest });
			leave(observation, reason);
			return;
		}
		const chosen =
			reachable.length === 1 || isOneShot(reachable.map((index) => checkpoints[index]!)) ? reachable : chooseFace(reachable, observation);
		if (chosen === null) {
			meetings.ambiguous.push({ observation, checkpoints: reachable });
			leave(observation, `its name means ${reachable.length} checkpoints within reach`);
			return;
		}
		for (const index of chosen) add(meetings.met, index, observation);
	};
	const chooseFace = (candidates: readonly number[], observation: Observation): readonly number[] | null => {
		const index = nearestFace(
			candidates.map((candidate) => ({
				index: candidate,
				checkpoint: checkpoints[candidate]!,
				offM: Math.abs(meet(checkpoints[candidate]!, observation.carried, observation.offsetMm).deviationM),
			})),
		);
		return index === null ? null : [index];
	};

	const meetByNearness = (observation: Observation): void => {
		const wanted = characteristicOfCode(observation.code);
		const candidates: number[] = [];
		grid.forEachNear(observation.carried, (index) => {
			if (wanted !== null && checkpoints[index]!.characteristic !== wanted) return;
			const checkpoint = checkpoints[index]!;
			if (isWithinReach(checkpoint, meet(checkpoint, observation.carried, observation.offsetMm), reachM, false)) candidates.push(index);
		});
		if (candidates.length === 0) {
			meetings.nothingInReach.push(observation);
			leave(observation, 'no checkpoint within reach');
			return;
		}
		const chosen =
			candidates.length === 1 || isOneShot(candidates.map((index) => checkpoints[index]!))
				? candidates
				: chooseFace(candidates, observation);
		if (chosen === null) {
			meetings.ambiguous.push({ observation, checkpoints: candidates });
			leave(observation, `${candidates.length} checkpoints within reach`);
			return;
		}
		for (const index of chosen)
			add(metByNearness, index, { observation, asideM: meet(checkpoints[index]!, observation.carried, observation.offsetMm).asideM });
	};

	/** The checkpoints that a name means; null where it means none. */
	const namedBy = (observation: Observation): readonly number[] | null => {
		const id = byId.get(observation.name.trim().toLowerCase());
		if (id !== undefined) return [id];
		const plain = byMark.get(observation.key);
		const split = plain === undefined ? splitCharacteristic(observation.key) : null;
		const named = plain ?? (split === null ? undefined : byMark.get(split.markKey));
		if (named === undefined) return null;
		const wanted = split?.characteristic ?? characteristicOfCode(observation.code);
		const said = wanted === null ? named : named.filter((index) => checkpoints[index]!.characteristic === wanted);
		return said.length > 0 ? said : named;
	};
	observations.forEach((observation, done) => {
		onPoint(done, observations.length);
		const named = namedBy(observation);
		if (named !== null) meetByName(observation, named);
		else if (isControlCode(observation.code)) leave(observation, 'its code marks control, not work');
		else if (observation.setup.isHeightsOnly) leave(observation, 'a level run meets checkpoints by name alone');
		else meetByNearness(observation);
	});
	takeNearest(checkpoints, metByNearness, meetings, leave);
	return meetings;
}

/** What came by nearness counts only where nothing came by name; of several on one face or level the one measured nearest its place. */
function takeNearest(
	checkpoints: readonly CheckInputCheckpoint[],
	metByNearness: ReadonlyMap<number, { observation: Observation; asideM: number }[]>,
	meetings: Meetings,
	leave: (observation: Observation, reason: string) => void,
): void {
	for (const [index, list] of metByNearness) {
		if (meetings.met.has(index)) {
			for (const { observation } of list) leave(observation, 'its checkpoint was measured by name');
			continue;
		}
		const [nearest, ...others] = [...list].sort((a, b) => a.asideM - b.asideM);
		// In plan the nearest of several would be the one that flatters the work.
		if (others.length > 0 && checkpoints[index]!.characteristic === 'plan') {
			meetings.refused.set(index, `${list.length} points within reach and none named`);
			for (const { observation } of list) {
				meetings.ambiguous.push({ observation, checkpoints: [index] });
				leave(observation, 'another point lies within reach of the same mark');
			}
			continue;
		}
		meetings.met.set(index, [nearest!.observation]);
		for (const { observation } of others) leave(observation, `${nearest!.observation.name} was measured nearer to the same checkpoint`);
	}
}

function distanceTo(checkpoint: CheckInputCheckpoint, { carried }: Observation): number {
	return Math.hypot(carried[0] - checkpoint.place[0], carried[1] - checkpoint.place[1], carried[2] - checkpoint.place[2]);
}

/** A level run gives no plan: its height is held against the design surface at the checkpoint's own place. */
function heightOnlyReach(checkpoint: CheckInputCheckpoint, observation: Observation, reachM: number): string | null {
	const { carried, offsetMm } = observation;
	return whyOutOfReach(checkpoint, meet(checkpoint, [checkpoint.place[0], checkpoint.place[1], carried[2]], offsetMm), reachM, true);
}

function add<T>(lists: Map<number, T[]>, index: number, value: T): void {
	const list = lists.get(index);
	if (list) list.push(value);
	else lists.set(index, [value]);
}
