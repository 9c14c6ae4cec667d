import { evaluateLimits } from '../../tolerance/limit.ts';
import { matchPreparedRule, prepareRules } from '../../tolerance/match-rule.ts';
import { derivedCharacteristics, type ToleranceRule } from '../../tolerance/sheet-schema.ts';
import type { CheckInput, CheckInputElement } from '../check-input.ts';
import type { DerivedResult } from '../check-schema.ts';
import type { CheckedCheckpoint } from '../checked-checkpoint.ts';
import { judge } from '../verdict.ts';
import { boltDistanceFigures, type MarkedEntry } from './bolt-distance.ts';
import { groupShiftFigures, groupTurnFigures, projectionFigures } from './bolt-group.ts';
import { bestFitFigures, straightedgeFigures } from './flatness.ts';
import { type DerivedFigure, linearUncertaintyMm, type MeasuredCheckpoint } from './linear-uncertainty.ts';
import { plumbFigures } from './plumb.ts';
import { sectionFigures } from './section.ts';

type Kind = DerivedResult['characteristic'];

/**
 * Plumb, section, flatness and what bolt groups give, wherever the sheet has a rule for them. Their uncertainty has the covariance between the places
 * (DOMAIN.md: anything derived from two places uses J_p·Q·J_qᵀ), so that what fit and set-up share cancels where it does.
 */
export function deriveResults(input: CheckInput, checked: readonly CheckedCheckpoint[]): DerivedResult[] {
	const kinds = derivedCharacteristics.filter((kind) => input.sheet.rules.some(({ match }) => match.characteristic === kind));
	if (kinds.length === 0) return [];
	const rules = prepareRules(input.sheet.rules.filter(({ match }) => match.characteristic !== undefined));
	const elements = new Map<string, CheckInputElement>(input.elements.map((element) => [element.id, element]));
	const byElement = new Map<string, MeasuredCheckpoint[]>();
	for (const entry of checked) {
		if (!isMeasured(entry)) continue;
		const list = byElement.get(entry.checkpoint.elementId);
		if (list) list.push(entry);
		else byElement.set(entry.checkpoint.elementId, [entry]);
	}
	const ruleOf = (element: CheckInputElement, kind: Kind): ToleranceRule | null =>
		matchPreparedRule(rules, {
			class: element.class,
			characteristic: kind,
			storey: element.storey,
			building: input.building ?? null,
			tag: element.tag,
			mark: element.mark,
			stage: input.stage,
			exposed: element.exposed ?? null,
			sizesM: element.sizesM,
		}).rule;
	const results: DerivedResult[] = [];
	for (const kind of kinds) {
		if (isOfGroup(kind)) {
			const hasRule = (elementId: string): boolean => ruleOf(elements.get(elementId)!, kind) !== null;
			const marked = [...byElement].flatMap(([elementId, entries]): MarkedEntry[] => {
				if (!hasRule(elementId)) return [];
				const { mark } = elements.get(elementId)!;
				const isAlone = entries.filter(({ measured }) => measured.offsetMm !== null).length <= 1;
				return entries.map((entry) => ({ ...entry, elementMark: isAlone ? mark : entry.checkpoint.mark }));
			});
			const others = kind === 'projection' ? [...byElement].flatMap(([elementId, entries]) => (hasRule(elementId) ? [] : entries)) : [];
			for (const figure of groupFigures(kind, marked, others)) {
				const element = elements.get(figure.elementId)!;
				results.push(judged(figure, kind, ruleOf(element, kind)!, element, input));
			}
			continue;
		}
		for (const [elementId, entries] of byElement) {
			const element = elements.get(elementId)!;
			const rule = ruleOf(element, kind);
			if (rule !== null)
				for (const figure of figuresOf(kind, elementId, entries, rule)) results.push(judged(figure, kind, rule, element, input));
		}
	}
	return results;
}

const groupKinds = ['bolt-distance', 'group-shift', 'group-turn', 'projection'] as const;
type GroupKind = (typeof groupKinds)[number];
const isOfGroup = (kind: Kind): kind is GroupKind => groupKinds.some((one) => one === kind);

function groupFigures(kind: GroupKind, marked: readonly MarkedEntry[], others: readonly MeasuredCheckpoint[]): DerivedFigure[] {
	switch (kind) {
		case 'bolt-distance':
			return boltDistanceFigures(marked);
		case 'group-shift':
			return groupShiftFigures(marked);
		case 'group-turn':
			return groupTurnFigures(marked);
		case 'projection':
			return projectionFigures(marked, others);
	}
}

function isMeasured(entry: CheckedCheckpoint): entry is MeasuredCheckpoint {
	return entry.observation !== null && entry.measured !== null;
}

/** A straightedge of 4 m where the rule names none: the length of DIN 18202 that most contracts speak of. */
const usualStraightedgeM = 4;

function figuresOf(
	kind: Exclude<Kind, GroupKind>,
	elementId: string,
	entries: readonly MeasuredCheckpoint[],
	rule: ToleranceRule,
): DerivedFigure[] {
	switch (kind) {
		case 'plumb':
			return plumbFigures(elementId, entries);
		case 'section':
			return sectionFigures(elementId, entries);
		case 'flatness':
			return straightedgeFigures(elementId, entries, rule.straightedgeM ?? usualStraightedgeM);
		case 'flatness-best-fit':
			return bestFitFigures(elementId, entries);
	}
}

function judged(figure: DerivedFigure, kind: Kind, rule: ToleranceRule, element: CheckInputElement, input: CheckInput): DerivedResult {
	const uncertaintyMm = linearUncertaintyMm(figure.terms);
	const hasUpperOnly = kind === 'flatness' || kind === 'flatness-best-fit';
	const evaluated = evaluateLimits(rule, element.sizesM, hasUpperOnly);
	const limitsMm: [number | null, number | null] | null = 'limitsMm' in evaluated ? [...evaluated.limitsMm] : null;
	const base = {
		elementId: figure.elementId,
		characteristic: kind,
		label: figure.label,
		deviationMm: figure.deviationMm,
		uncertaintyMm,
		ruleId: rule.id,
		from: [...new Set(figure.from)],
	};
	if (limitsMm === null || (limitsMm[0] === null && limitsMm[1] === null))
		return { ...base, limitsMm: null, verdict: 'no-tolerance', conformity: null };
	const standardUncertaintyMm = uncertaintyMm === null ? null : uncertaintyMm / 2;
	return {
		...base,
		limitsMm,
		...judge({ deviationMm: figure.deviationMm, standardUncertaintyMm, limitsMm, decision: input.sheet.decision }),
	};
}
