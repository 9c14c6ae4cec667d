import type { Finding } from '../fit/fit-schema.ts';
import { matchPreparedRule, prepareRules } from '../tolerance/match-rule.ts';
import { apartMm } from './apart.ts';
import { limitFindings, setupFindings, uncertaintyFindings } from './check-findings.ts';
import type { CheckInput, CheckInputCheckpoint, CheckInputElement, CheckOutput } from './check-input.ts';
import { type CheckSummary, type Deviation, verdicts } from './check-schema.ts';
import type { CheckedCheckpoint } from './checked-checkpoint.ts';
import { commonShiftFindings } from './common-shift.ts';
import { deriveResults } from './derived/derive-results.ts';
import { type CheckpointLimits, checkpointLimits, judgeDeviation, type LimitFault } from './judge-deviation.ts';
import { type MeasuredDeviation, measureDeviation } from './measure-deviation.ts';
import { meetCheckpoints } from './meet-checkpoints.ts';
import { meetingFindings } from './meeting-findings.ts';
import { type Observation, type PreparedSetup, prepareSetup } from './observation.ts';

/** Thrown by `runCheck` when the caller no longer wants the answer. */
export class CheckCancelled extends Error {
	override name = 'CheckCancelled';
}

export interface CheckProgress {
	onProgress?(done: number, of: number): void;
	isCancelled?(): boolean;
}

const reachDefaultM = 0.3;

/**
 * Holds a survey against the design: for every checkpoint the deviation, its uncertainty and the verdict.
 *
 * Frames  checkpoints in the design frame; points in the survey frame of their set-up, carried over by its fit. Metres; results in millimetres.
 * Sign    + is proud or high. Not measured is null with a reason.
 * Source  GUM (JCGM 100) for u, JCGM 106 for the verdict; what meets what is DOMAIN.md, "Checkpoints and deviations".
 * Errors  CheckCancelled where `isCancelled` says so; an unknown element of a checkpoint is a RangeError (the caller's fault).
 * Cost    a grid over the checkpoints: points × a few, not points × checkpoints.
 */
export function runCheck(input: CheckInput, options: CheckProgress = {}): CheckOutput {
	const reachM = input.reachM ?? reachDefaultM;
	const setups = new Map<string, PreparedSetup>(input.setups.map((setup) => [setup.id, prepareSetup(setup)]));
	const steps = input.points.length + input.checkpoints.length;
	const report = (done: number): void => {
		if (done % 256 !== 0) return;
		if (options.isCancelled?.()) throw new CheckCancelled('The check was cancelled.');
		options.onProgress?.(done, steps);
	};
	const meetings = meetCheckpoints(input, setups, reachM, report);
	const limitsOf = limitsByElement(input);
	const disagreeing: Finding[] = [];
	const checked = input.checkpoints.map((checkpoint, index): CheckedCheckpoint => {
		report(input.points.length + index);
		const limits = limitsOf(checkpoint);
		const best = bestOf(checkpoint, meetings.met.get(index) ?? [], meetings.unmatched, disagreeing);
		const { observation, measured } = best ?? { observation: null, measured: null };
		const refused =
			meetings.refused.get(index) ??
			(input.points.length === 0 ? 'no points in this survey' : 'no survey point of its name or within reach');
		return { checkpoint, observation, measured, limits, deviation: deviationOf(checkpoint, observation, measured, limits, refused, input) };
	});
	const deviations = checked.map(({ deviation }) => deviation);
	options.onProgress?.(steps, steps);
	const faults = checked.flatMap(({ limits, checkpoint }): { fault: LimitFault; checkpoint: CheckInputCheckpoint }[] =>
		limits.fault === null ? [] : [{ fault: limits.fault, checkpoint }],
	);
	return {
		deviations,
		derived: deriveResults(input, checked),
		findings: [
			...meetingFindings(input, meetings, reachM),
			...commonShiftFindings(checked),
			...disagreeing,
			...setupFindings(input, checked),
			...uncertaintyFindings(checked),
			...limitFindings(input, faults),
		],
		unmatchedPoints: meetings.unmatched,
		summary: summarise(deviations),
	};
}

/** Several set-ups may have measured one place: the one with the smallest U counts, they are never averaged; apart by more than the U of their difference is a finding. */
function bestOf(
	checkpoint: CheckInputCheckpoint,
	observations: readonly Observation[],
	unmatched: CheckOutput['unmatchedPoints'],
	findings: Finding[],
): { observation: Observation; measured: MeasuredDeviation } | null {
	const all = observations.map((observation) => ({ observation, measured: measureDeviation(checkpoint, observation) }));
	const sorted = all.sort((a, b) => (a.measured.expandedUncertaintyMm ?? Infinity) - (b.measured.expandedUncertaintyMm ?? Infinity) || 0);
	const [best, ...others] = sorted;
	for (const { observation, measured } of others) {
		unmatched.push({
			name: observation.name,
			setupId: observation.setup.setup.id,
			reason: `${best!.observation.name} of ${best!.observation.setup.setup.name} was measured as well and is better known`,
		});
		const apart = apartMm({ ...checkpoint, ...best!.measured }, { ...checkpoint, ...measured });
		if (apart !== null && apart.apartMm > apart.togetherMm) {
			findings.push({
				code: 'measured-twice',
				pairs: [checkpoint.mark],
				message: `${checkpoint.mark}: ${best!.observation.setup.setup.name} and ${observation.setup.setup.name} are ${apart.apartMm.toFixed(0)} mm apart, more than their U together (${apart.togetherMm.toFixed(0)} mm).`,
				evidence: { checkpointId: checkpoint.id, ...apart },
			});
		}
	}
	return best ?? null;
}

/** Limits are the same for all checkpoints of one kind of one element. */
function limitsByElement(input: CheckInput): (checkpoint: CheckInputCheckpoint) => CheckpointLimits {
	const elements = new Map<string, CheckInputElement>(input.elements.map((element) => [element.id, element]));
	const rules = prepareRules(input.sheet.rules);
	const found = new Map<string, CheckpointLimits>();
	return ({ elementId, characteristic }) => {
		const key = `${characteristic}\n${elementId}`;
		const known = found.get(key);
		if (known) return known;
		const element = elements.get(elementId);
		if (element === undefined) throw new RangeError(`A checkpoint names the element ${elementId}, which is not among the elements given.`);
		const matched = matchPreparedRule(rules, {
			class: element.class,
			characteristic,
			storey: element.storey,
			building: input.building ?? null,
			tag: element.tag,
			mark: element.mark,
			stage: input.stage,
			exposed: element.exposed ?? null,
			sizesM: element.sizesM,
		});
		const limits = checkpointLimits(
			matched,
			element.sizesM,
			characteristic === 'plan',
			(axes) => (axes === 'element' ? element.axisYawRad : input.gridYawRad) ?? 0,
		);
		found.set(key, limits);
		return limits;
	};
}

function deviationOf(
	checkpoint: CheckInputCheckpoint,
	observation: Observation | null,
	measured: MeasuredDeviation | null,
	limits: CheckpointLimits,
	refused: string,
	input: CheckInput,
): Deviation {
	return {
		checkpointId: checkpoint.id,
		elementId: checkpoint.elementId,
		characteristic: checkpoint.characteristic,
		place: [...checkpoint.place],
		direction: checkpoint.direction === null ? null : [...checkpoint.direction],
		label: checkpoint.label,
		measured: measured === null ? null : [...measured.measured],
		notMeasuredReason: measured === null ? refused : null,
		pointName: observation?.name ?? null,
		setupId: observation?.setup.setup.id ?? null,
		pointCount: observation?.pointCount ?? 0,
		deviationMm: measured?.deviationMm ?? null,
		offsetMm: measured?.offsetMm ?? null,
		covarianceMm2: measured?.covarianceMm2 ?? null,
		standardUncertaintyPartsMm: measured?.partsMm ?? null,
		expandedUncertaintyMm: measured?.expandedUncertaintyMm ?? null,
		limitsMm: limits.limitsMm,
		...(limits.boxYawRad === null ? {} : { boxYawRad: limits.boxYawRad }),
		...(observation === null || observation.spreadMm === null ? {} : { spreadMm: observation.spreadMm }),
		ruleId: limits.rule?.id ?? null,
		...judgeDeviation(measured, limits, input.sheet.decision),
	};
}

/** How many checkpoints have each verdict; none is left out. */
export function summarise(deviations: readonly Pick<Deviation, 'verdict'>[]): CheckSummary {
	const summary = Object.fromEntries(verdicts.map((verdict) => [verdict, 0])) as CheckSummary;
	for (const { verdict } of deviations) summary[verdict]++;
	return summary;
}
