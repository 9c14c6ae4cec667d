import { fitInflation } from '../fit/carry-point.ts';
import type { Finding } from '../fit/fit-schema.ts';
import type { CheckInput, CheckInputCheckpoint } from './check-input.ts';
import type { CheckedCheckpoint } from './checked-checkpoint.ts';
import type { LimitFault } from './judge-deviation.ts';
import { counted, nameList } from './name-list.ts';

const mostNames = 200;

/** Findings about set-ups: repeats that differ, and a fit whose test failed and so counts with σ̂₀. */
export function setupFindings(input: CheckInput, checked: readonly CheckedCheckpoint[]): Finding[] {
	const findings: Finding[] = [];
	const wide = new Set(checked.flatMap(({ observation }) => (observation?.isSpreadTooWide ? [observation] : [])));
	if (wide.size > 0) {
		const names = [...wide].map(({ name }) => name);
		findings.push({
			code: 'repeats',
			pairs: names.slice(0, mostNames),
			message: `${counted(names.length, 'point was', 'points were')} measured more than once with a difference over 3σ√2: ${nameList([...wide].map(({ name, spreadMm }) => `${name} (${spreadMm!.toFixed(1)} mm)`))}. The mean was taken.`,
			evidence: { spreadMm: Object.fromEntries([...wide].slice(0, mostNames).map(({ name, spreadMm }) => [name, spreadMm])) },
		});
	}
	for (const { fit, name } of input.setups) {
		const factor = fitInflation(fit);
		if (factor === 1) continue;
		findings.push({
			code: 'fit-test-failed',
			pairs: [],
			message: `The fit of ${name} scatters ${factor.toFixed(1)} times as much as its σ allow; its uncertainty counts ${factor.toFixed(1)} times.`,
			evidence: { setup: name, factor, varianceFactor: fit.varianceFactor },
		});
	}
	return findings;
}

/** Findings about what the survey can tell: U that is not known, and limits tighter than U (JCGM 106, 7.6: Cm = T/(4u) under 1 is never within). */
export function uncertaintyFindings(checked: readonly CheckedCheckpoint[]): Finding[] {
	const findings: Finding[] = [];
	const unknown = checked.filter(({ measured }) => measured !== null && measured.expandedUncertaintyMm === null);
	if (unknown.length > 0) {
		const withoutSigma = unknown.filter(({ measured }) => measured!.partsMm.point === null).length;
		findings.push({
			code: 'uncertainty-unknown',
			pairs: unknown.slice(0, mostNames).map(({ checkpoint }) => checkpoint.mark),
			message: `The uncertainty of ${counted(unknown.length, 'deviation')} is not known: ${withoutSigma > 0 ? 'the points have no σ' : 'the fit has neither σ nor a pair to spare'}.`,
			evidence: { count: unknown.length, withoutSigma },
		});
	}
	const blunt = checked.filter(({ measured, limits, checkpoint }) => {
		if (measured?.expandedUncertaintyMm == null || limits.limitsMm === null) return false;
		const [lower, upper] = limits.limitsMm;
		const widthMm =
			checkpoint.characteristic === 'plan' && limits.boxYawRad === null
				? 2 * upper!
				: lower === null || upper === null
					? Infinity
					: upper - lower;
		return widthMm < 2 * measured.expandedUncertaintyMm;
	});
	if (blunt.length > 0) {
		findings.push({
			code: 'capability',
			pairs: blunt.slice(0, mostNames).map(({ checkpoint }) => checkpoint.mark),
			message: `${counted(blunt.length, 'checkpoint')} can never be found within: the limits are narrower than the survey can tell (${nameList(blunt.map(({ checkpoint }) => checkpoint.mark))}).`,
			evidence: { count: blunt.length },
		});
	}
	return findings;
}

/** Findings about the sheet: rules that need a size the element has not, limits that cross, axes that are not known. */
export function limitFindings(input: CheckInput, faults: readonly { fault: LimitFault; checkpoint: CheckInputCheckpoint }[]): Finding[] {
	const byRule = new Map<string, { fault: LimitFault; marks: string[] }>();
	for (const { fault, checkpoint } of faults) {
		const entry = byRule.get(fault.rule.id) ?? { fault, marks: [] };
		entry.marks.push(checkpoint.mark);
		byRule.set(fault.rule.id, entry);
	}
	const findings = [...byRule.values()].map(
		({ fault, marks }): Finding =>
			'missingSize' in fault
				? {
						code: 'limit-needs-size',
						pairs: marks.slice(0, mostNames),
						message: `Rule ${fault.rule.id} asks for the ${fault.missingSize}, which the shape of ${counted(marks.length, 'checkpoint')} does not give: ${nameList(marks)}.`,
						evidence: { rule: fault.rule.id, size: fault.missingSize, count: marks.length },
					}
				: {
						code: 'limits-crossed',
						pairs: marks.slice(0, mostNames),
						message: `Rule ${fault.rule.id} has its lower limit above its upper one for ${nameList(marks)}.`,
						evidence: { rule: fault.rule.id, count: marks.length },
					},
	);
	const hasGridBox = input.sheet.rules.some(({ shape, axes }) => shape === 'box' && axes !== 'element');
	if (hasGridBox && input.gridYawRad == null) {
		findings.push({
			code: 'no-grid',
			pairs: [],
			message: 'A rule speaks of the grid and no grid is known: plan east and north were taken.',
			evidence: {},
		});
	}
	const hasElementBox = input.sheet.rules.some(({ shape, axes }) => shape === 'box' && axes === 'element');
	const withoutAxes = hasElementBox ? input.elements.filter(({ axisYawRad }) => axisYawRad == null) : [];
	if (withoutAxes.length > 0) {
		findings.push({
			code: 'no-element-axes',
			pairs: withoutAxes.slice(0, mostNames).map(({ mark }) => mark),
			message: `A rule speaks of the element's own axes, which ${counted(withoutAxes.length, 'element')} do not have: plan east and north were taken.`,
			evidence: { count: withoutAxes.length },
		});
	}
	return findings;
}
