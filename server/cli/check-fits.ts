import { computeFit } from '#shared/fit/compute-fit.ts';
import type { Finding, FitKind, FitPair, FitResult } from '#shared/fit/fit-schema.ts';
import { isLevelled } from '#shared/fit/least-pairs.ts';
import { readFitInput } from '#shared/fit/read-fit-input.ts';
import type { PointRow } from '#shared/survey/read-point-table.ts';
import type { ReadControlPoint } from '../features/control/read-control.ts';
import { pairTargets } from '../features/fit/pair-targets.ts';
import { InputRefused } from './refusal.ts';

/** One set-up with its fit: survey frame → design frame, metres. The name is empty where the file has no set-ups. */
export interface FittedSetup {
	readonly name: string;
	readonly fit: FitResult;
	readonly targets: readonly PointRow[];
	/** What the pairing says: repeats, loose names, σ that are not used, targets and control without the other. */
	readonly findings: readonly Finding[];
}

/** "Set-up S1", or what stands for the only one. */
export const setupInWords = (name: string): string => (name === '' ? 'The set-up' : `Set-up ${name}`);

/** Whether a pair has the coordinates that this kind of fit asks for; benchmarks and marks without a height serve some alone. */
function canServe({ control }: FitPair, kind: FitKind): boolean {
	if (kind === 'height') return control[2] !== null;
	return isLevelled(kind) || control.every((value) => value !== null);
}

/**
 * Fits each set-up of the targets to the control, in the order of the targets. Targets and control points pair by name; repeats are averaged.
 * @throws InputRefused with the fit's own code where a set-up cannot be fitted, `where` the set-up and what the fit says
 */
export function fitSetups(
	targets: readonly PointRow[],
	control: readonly ReadControlPoint[],
	kind: FitKind,
	targetsPath: string,
): FittedSetup[] {
	const names = [...new Set(targets.map(({ setup }) => setup))];
	return names.map((name) => {
		const own = targets.filter(({ setup }) => setup === name);
		const paired = pairTargets(
			own.map((row) => ({
				name: row.name,
				row: row.row,
				code: row.code,
				surveyM: whole(row.xyzM),
				sigmaM: row.sigmaM === null ? null : whole(row.sigmaM),
			})),
			control.map(({ name: mark, designM, sigmaPlanM, sigmaHeightM }) => ({ name: mark, designM, sigmaPlanM, sigmaHeightM })),
		);
		const [pairs, left] = [paired.pairs.filter((pair) => canServe(pair, kind)), paired.pairs.filter((pair) => !canServe(pair, kind))];
		const where = name === '' ? targetsPath : `${targetsPath}: set-up ${name}`;
		const read = readFitInput({ fit: kind, pairs });
		const outcome = read.ok ? computeFit(read.input) : read;
		if (!outcome.ok) {
			const { code, message, where: inFit } = outcome.refusal;
			throw new InputRefused(code, `${setupInWords(name)}: ${message}`, inFit === undefined ? where : `${where}: ${inFit}`);
		}
		const evidence = { setup: name === '' ? null : name };
		const said = (code: string, message: string, of: readonly string[]): Finding[] => [{ code, pairs: [...of], message, evidence }];
		return {
			name,
			fit: outcome.result,
			targets: own,
			findings: [
				...(paired.findings ?? []).map((finding) => ({ ...finding, evidence: { ...evidence, ...finding.evidence } })),
				...(paired.notes ?? []).flatMap((note) => said('targets', note, [])),
				...(paired.sigmaNote === null ? [] : said('sigma-unused', paired.sigmaNote, [])),
				...(left.length === 0 ? [] : leftOut(left, kind, said)),
				...(paired.targetsWithoutControl.length === 0
					? []
					: said(
							'target-without-control',
							`${setupInWords(name)}: no control point is named ${paired.targetsWithoutControl.slice(0, 20).join(', ')}.`,
							paired.targetsWithoutControl,
						)),
			],
		};
	});
}

function leftOut(
	left: readonly FitPair[],
	kind: FitKind,
	said: (code: string, message: string, of: readonly string[]) => Finding[],
): Finding[] {
	const names = left.map(({ name }) => name);
	const lacks = kind === 'height' ? 'a height' : 'plan and height both';
	return said('control-incomplete', `A ${kind} fit needs ${lacks}: ${names.join(', ')} served for nothing.`, names);
}

/** A survey's rows have all three: the reader refuses others. */
export function whole([x, y, z]: readonly [number | null, number | null, number | null]): [number, number, number] {
	if (x === null || y === null || z === null) throw new Error('A row without a coordinate was let through.');
	return [x, y, z];
}
