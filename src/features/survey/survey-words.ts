import type { SetupSummary, SurveySummary } from '#shared/survey/contract.ts';
import { levelRunOf, levelRunWords } from '#shared/survey/level-run.ts';
import type { Stage } from '#shared/tolerance/sheet-schema.ts';
import { counted } from '#src/lib/format.ts';

export const stageWords: Record<Stage, string> = {
	'before-pour': 'before the pour',
	'as-cast-shored': 'as cast, shored',
	'as-cast': 'as cast',
	later: 'later',
};

/** "levelled, its own scale, σ 2 mm plan, 1.5 mm level, common part 2 mm". */
export function setupWords({ levelling, bringsScale, pointSigmaM, commonMm }: SetupSummary): string {
	const sigma = pointSigmaM
		? `σ ${Number((pointSigmaM.plan * 1000).toFixed(2))} mm plan, ${Number((pointSigmaM.height * 1000).toFixed(2))} mm level where the file gives none`
		: 'σ as the file gives them';
	return `${levelling === 'levelled' ? 'levelled' : 'free'}, ${bringsScale ? 'brings its own scale' : 'scale not known'}, ${sigma}, common part ${commonMm} mm`;
}

/** A set-up's level run with its judgement; null where none was said. */
export function levelWords({ observation }: Pick<SetupSummary, 'observation'>): { words: string; isOver: boolean } | null {
	const run = levelRunOf(observation);
	return run === null ? null : { words: levelRunWords(run), isOver: run.isWithin === false };
}

/** What a survey's set-ups still need: "set-up S2 has no adopted fit". */
export function surveyHeadline({ number, setups, state }: Pick<SurveySummary, 'number' | 'setups' | 'state'>): string {
	if (state === 'storing') return `Survey ${number} is being stored`;
	if (state === 'failed') return `Survey ${number} was not stored`;
	const open = setups.filter((setup) => setup.adoptedFitId === null);
	if (open.length === 0) return `Survey ${number} is tied to the design: ${counted(setups.length, 'set-up')}, each with an adopted fit`;
	const names = open.map((setup) => setup.name).join(', ');
	return `Survey ${number} cannot be checked whole yet: set-up ${names} ${open.length === 1 ? 'has' : 'have'} no adopted fit`;
}
