import type { DecisionRule } from '../tolerance/sheet-schema.ts';
import type { Deviation } from './check-schema.ts';
import { judgeDeviation } from './judge-deviation.ts';

type Figures = Pick<Deviation, 'deviationMm' | 'offsetMm' | 'covarianceMm2' | 'expandedUncertaintyMm' | 'limitsMm'> &
	Partial<Pick<Deviation, 'boxYawRad'>>;

/**
 * The verdict of a deviation once more, from the figures that are kept with it alone: what a record's verifier and a screen hold the stored verdict against.
 * Millimetres. The figures determine it wholly: no fit, survey or sheet is needed, only the decision rule.
 */
export function rejudge(figures: Figures, decision: DecisionRule): Pick<Deviation, 'verdict' | 'conformity' | 'beyondMm'> {
	const { deviationMm, offsetMm, covarianceMm2, expandedUncertaintyMm, limitsMm, boxYawRad } = figures;
	if (deviationMm === null) return { verdict: 'not-measured', conformity: null, beyondMm: null };
	return judgeDeviation(
		{ deviationMm, offsetMm, covarianceMm2, expandedUncertaintyMm },
		{ limitsMm, boxYawRad: boxYawRad ?? null },
		decision,
	);
}
