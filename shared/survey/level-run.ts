import type { Finding } from '../fit/fit-schema.ts';
import type { SetupObservation } from './observation-record.ts';

/** A level run: heights carried from a benchmark over the points of a set-up to a closing benchmark. */

/** Misclosure that a run of a kilometre may have, mm; it grows with the root of the length (common practice). */
const allowedMmPerRootKm = 10;

export interface LevelRun {
	start: string | null;
	close: string | null;
	lengthKm: number | null;
	misclosureMm: number | null;
	/** 10·√km; null where the length was not said. */
	allowedMm: number | null;
	/** null where either figure was not said. */
	isWithin: boolean | null;
}

/** What was said of a set-up's level run, judged; null where nothing was. */
export function levelRunOf(observation: SetupObservation | null | undefined): LevelRun | null {
	const start = observation?.levelStart || null;
	const close = observation?.levelClose || null;
	const lengthKm = observation?.levelLengthKm ?? null;
	const misclosureMm = observation?.levelMisclosureMm ?? null;
	if (start === null && close === null && lengthKm === null && misclosureMm === null) return null;
	const allowedMm = lengthKm === null ? null : allowedMmPerRootKm * Math.sqrt(lengthKm);
	const isWithin = allowedMm === null || misclosureMm === null ? null : Math.abs(misclosureMm) <= allowedMm;
	return { start, close, lengthKm, misclosureMm, allowedMm, isWithin };
}

/** `level-misclosure` where the run closes worse than it may; and `level-open` where it was not said how it closes. */
export function levelRunFindings(observation: SetupObservation | null | undefined): Finding[] {
	const run = levelRunOf(observation);
	if (run === null) return [];
	const marks = [...new Set([run.start, run.close].filter((mark) => mark !== null))];
	if (run.isWithin === false) {
		return [
			{
				code: 'level-misclosure',
				pairs: marks,
				message: `The level run ${levelWay(run)} misses its closing benchmark by ${run.misclosureMm!.toFixed(1)} mm; 10·√km allows ${run.allowedMm!.toFixed(1)} mm (common practice). Level it again, or find the benchmark that moved.`,
				evidence: { ...run },
			},
		];
	}
	if (run.isWithin === null) {
		const lacking = [run.misclosureMm === null && 'its misclosure', run.lengthKm === null && 'its length'].filter(Boolean).join(' and ');
		return [
			{
				code: 'level-open',
				pairs: marks,
				message: `The level run ${levelWay(run)} cannot be judged: ${lacking} was not stated.`,
				evidence: { ...run },
			},
		];
	}
	return [];
}

/** "from BM1 to BM2", "from BM1 and back". */
export function levelWay({ start, close }: Pick<LevelRun, 'start' | 'close'>): string {
	if (start !== null && start === close) return `from ${start} and back`;
	return [start === null ? '' : `from ${start}`, close === null ? '' : `to ${close}`].filter(Boolean).join(' ') || 'of this set-up';
}

/** The run in a sentence, with its judgement. */
export function levelRunWords(run: LevelRun): string {
	const length = run.lengthKm === null ? 'length not stated' : `${run.lengthKm} km`;
	if (run.misclosureMm === null) return `Level run ${levelWay(run)}, ${length}: misclosure not stated`;
	const judged =
		run.allowedMm === null
			? 'not judged'
			: `${run.isWithin ? 'within' : 'OVER'} the ${run.allowedMm.toFixed(1)} mm of 10·√km (common practice)`;
	return `Level run ${levelWay(run)}, ${length}: closes to ${run.misclosureMm.toFixed(1).replace('-', '−')} mm, ${judged}`;
}
