import type { CheckInput, CheckInputPoint, CheckOutput } from '#shared/check/check-input.ts';
import { runCheck } from '#shared/check/run-check.ts';
import { type MapFrame, mapFrameOf } from '#shared/control/map-frame.ts';
import type { Finding } from '#shared/fit/fit-schema.ts';
import { gridYawRad } from '#shared/model/grid-yaw.ts';
import type { ModelReading } from '#shared/model/model-schema.ts';
import type { PointRow } from '#shared/survey/read-point-table.ts';
import type { ToleranceSheet } from '#shared/tolerance/sheet-schema.ts';
import { readControl } from '../features/control/read-control.ts';
import { type CheckArguments, readCheckArguments } from './check-arguments.ts';
import { type OpenedTable, openTable, readSheet, refuseFaults, rowsOf } from './check-files.ts';
import { type FittedSetup, fitSetups, whole } from './check-fits.ts';
import { readModelFile } from './checkpoints.ts';
import { type Answer, InputRefused } from './refusal.ts';

/** Where a point lies that is a target seen again, and no work: metres, survey frame. */
const sameSpotM = 0.1;

/**
 * The command line's `check`: reads model, targets, control, sheet and points, fits each set-up, and holds the points against the design.
 * Arguments in, exit code and what to print as JSON out (0 done, 2 the input is refused). `note` gets progress for standard error.
 * The small files are read first, so that what is wrong in them is said at once. Design frame, metres; results in millimetres.
 */
export async function runCheckCommand(args: readonly string[], note: (text: string) => void): Promise<Answer> {
	try {
		return { exitCode: 0, output: await check(readCheckArguments(args), note) };
	} catch (error) {
		if (error instanceof InputRefused) return error.answer;
		throw error;
	}
}

async function check(asked: CheckArguments, note: (text: string) => void): Promise<unknown> {
	const sheet = await readSheet(asked.tolerances);
	const targets = await openTable(asked.targets, asked.unit, false);
	const control = await openTable(asked.control, asked.unit, true);
	const points = asked.points === null ? null : await openTable(asked.points, asked.unit, false);
	const [targetRows, pointRows] = [rowsOf(targets), points === null ? [] : rowsOf(points)];
	// Control in the design frame needs no model: what is wrong with the fits is said before it is read.
	const inFile = controlOf(control, null);
	const fitted = (marks: typeof inFile): { setups: FittedSetup[]; work: PointRow[] } => {
		const setups = fitSetups(targetRows, marks, asked.fit, asked.targets);
		return { setups, work: pointRows.filter((row) => !isTarget(row, setupFor(row, setups, asked))) };
	};
	const early = asked.controlFrame === 'design' ? fitted(inFile) : null;
	const model = await readModelFile(asked.model, note);
	if (!model.ok) throw new InputRefused(model.code, model.message, asked.model);
	const { reading, sha256 } = model;
	const { setups, work } = early ?? fitted(controlOf(control, mapFrameFor(reading)));
	if (points === null) note('No points are given: nothing is measured.');
	else if (work.length < pointRows.length) note(`${pointRows.length - work.length} of ${pointRows.length} points are targets and no work.`);
	const output = runCheck(checkInput(reading, setups, work, sheet, asked));
	const findings = [
		...[targets, control, ...(points === null ? [] : [points])].flatMap((table) => table.findings),
		...reading.findings,
		...setups.flatMap(({ name, fit, findings: ofPairing }) => [
			...ofPairing,
			...fit.findings.map((finding) => ({ ...finding, evidence: { ...finding.evidence, setup: nameOrNull(name) } })),
		]),
		...output.findings,
	];
	return answerOf(reading, sha256, setups, output, findings);
}

const nameOrNull = (name: string): string | null => (name === '' ? null : name);

function controlOf(table: OpenedTable, mapFrame: MapFrame | null): ReturnType<typeof readControl>['points'] {
	const read = readControl(table.bytes, table.reading, mapFrame, null);
	const twice = read.faults.find(({ message }) => /has one position\.$/.test(message));
	if (twice !== undefined && read.faults[0] === twice)
		throw new InputRefused('duplicate-name', `${table.path}: ${twice.message}`, `${table.path}:${twice.row}`);
	refuseFaults(table.path, read.faults, read.faultCount);
	return read.points;
}

function mapFrameFor({ mapConversion, metresPerUnit }: ModelReading): MapFrame {
	if (mapConversion === null) {
		const why = 'The model has no map position (IfcMapConversion), so control in the map frame cannot be brought to the design frame.';
		throw new InputRefused('no-map-conversion', why, '--control-frame');
	}
	try {
		return mapFrameOf(mapConversion, metresPerUnit);
	} catch (error) {
		if (error instanceof RangeError) throw new InputRefused('no-map-conversion', error.message, '--control-frame');
		throw error;
	}
}

/** The set-up that a point was measured from; the only one where neither file has set-ups, or the points name none and there is one. */
function setupFor({ setup, row }: PointRow, setups: readonly FittedSetup[], { points, targets }: CheckArguments): FittedSetup {
	const own = setups.find(({ name }) => name === setup) ?? (setup === '' && setups.length === 1 ? setups[0] : undefined);
	if (own !== undefined) return own;
	const why =
		setup === ''
			? `does not say its set-up, and ${targets} has ${setups.length}: ${setups.map(({ name }) => name).join(', ')}`
			: `is of set-up ${setup}, of which ${targets} has no targets`;
	throw new InputRefused('bad-input', `${points}: Row ${row} ${why}.`, `${points}:${row}`);
}

/** A list may hold targets and work together: a point of a paired target's name at its spot is that target. */
function isTarget(row: PointRow, { fit, targets }: FittedSetup): boolean {
	return targets.some(
		(target) =>
			target.name === row.name &&
			whole(target.xyzM).every((value, axis) => Math.abs(value - whole(row.xyzM)[axis]!) < sameSpotM) &&
			fit.pairs.some(({ name }) => name.trim() === target.name.trim()),
	);
}

function checkInput(
	reading: ModelReading,
	setups: readonly FittedSetup[],
	work: readonly PointRow[],
	sheet: ToleranceSheet,
	asked: CheckArguments,
): CheckInput {
	return {
		elements: reading.elements.map((element) => ({ ...element, id: String(element.entityNumber) })),
		checkpoints: reading.checkpoints.map((checkpoint) => ({ ...checkpoint, elementId: String(checkpoint.entityNumber) })),
		setups: setups.map(({ name, fit }) => ({ id: name, name, fit, commonMm: asked.commonMm, pointSigmaM: null })),
		points: work.map(
			(row): CheckInputPoint => ({
				name: row.name,
				setupId: setupFor(row, setups, asked).name,
				surveyPoint: whole(row.xyzM),
				sigmaM: row.sigmaM === null ? null : whole(row.sigmaM),
				offsetMm: row.offsetMm ?? 0,
				code: row.code,
			}),
		),
		sheet,
		stage: asked.stage,
		gridYawRad: gridYawRad(reading.grid),
	};
}

function answerOf(
	{ schema, unit, metresPerUnit, project, mapConversion, elements, checkpoints }: ModelReading,
	sha256: string,
	setups: readonly FittedSetup[],
	{ deviations, derived, summary, unmatchedPoints }: CheckOutput,
	findings: readonly Finding[],
): unknown {
	const globalIdOf = new Map(elements.map(({ entityNumber, globalId }) => [String(entityNumber), globalId]));
	const setupName = (id: string | null): string | null => (id === null ? null : nameOrNull(id));
	return {
		model: { schema, unit, metresPerUnit, project, mapConversion, sha256 },
		fits: setups.map(({ name, fit }) => ({ setup: nameOrNull(name), ...fit })),
		checkpoints: deviations.map((deviation, at) => ({
			id: deviation.checkpointId,
			globalId: globalIdOf.get(deviation.elementId),
			mark: checkpoints[at]!.mark,
			characteristic: deviation.characteristic,
			place: deviation.place,
			direction: deviation.direction,
			label: deviation.label,
			measured: deviation.measured,
			notMeasuredReason: deviation.notMeasuredReason,
			point: deviation.pointName,
			pointCount: deviation.pointCount,
			setup: setupName(deviation.setupId),
			deviationMm: deviation.deviationMm,
			offsetMm: deviation.offsetMm,
			uncertaintyMm: deviation.expandedUncertaintyMm,
			limitsMm: deviation.limitsMm,
			rule: deviation.ruleId,
			verdict: deviation.verdict,
			conformity: deviation.conformity,
		})),
		derived: derived.map(({ elementId, ruleId, ...result }) => ({ globalId: globalIdOf.get(elementId), ...result, rule: ruleId })),
		unmatchedPoints: unmatchedPoints.map(({ name, setupId, reason }) => ({ name, setup: setupName(setupId), reason })),
		findings,
		summary,
	};
}
