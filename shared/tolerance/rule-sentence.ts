import { classInWords } from './element-words.ts';
import { limitText, signedLimitText } from './millimetre-text.ts';
import type { Limit, LimitTerm, RuleMatch, Stage, ToleranceRule } from './sheet-schema.ts';

const stageWords: Readonly<Record<Stage, string>> = {
	'before-pour': 'before the pour',
	'as-cast-shored': 'as cast, shored',
	'as-cast': 'as cast',
	later: 'later',
};

const characteristicWords: Readonly<Record<NonNullable<RuleMatch['characteristic']>, string>> = {
	plan: ' in plan',
	level: ', level',
	face: ', faces',
	plumb: ', plumb',
	section: ', section',
	flatness: ', flatness under a straightedge',
	'flatness-best-fit': ', flatness about the best-fit plane',
	'bolt-distance': ', distances within a group',
	'group-shift': ', shift of a group',
	'group-turn': ', turn of a group at its farthest mark',
	projection: ', projection over the concrete',
};

const sizeWords = { length: 'long', height: 'high', thickness: 'thick' } as const;

function subjectWords({ match, straightedgeM }: ToleranceRule): string {
	const parts = [
		`${match.class === undefined ? 'Everything' : classInWords(match.class)}${match.characteristic === undefined ? '' : characteristicWords[match.characteristic]}`,
	];
	if (match.characteristic === 'flatness' && straightedgeM !== undefined) parts[0] += ` of ${straightedgeM} m`;
	if (match.mark !== undefined) parts.push(`mark ${match.mark}`);
	if (match.tag !== undefined) parts.push(`tag ${match.tag}`);
	if (match.sizeMm !== undefined) {
		const [over, to] = match.sizeMm;
		const unit = sizeWords[match.of ?? 'length'];
		parts.push(over <= 0 ? `up to ${limitText(to)} mm ${unit}` : `over ${limitText(over)} to ${limitText(to)} mm ${unit}`);
	}
	if (match.exposed !== undefined) parts.push(match.exposed ? 'exposed' : 'not exposed');
	if (match.storey !== undefined) parts.push(`on ${match.storey}`);
	if (match.building !== undefined) parts.push(`in ${match.building}`);
	if (match.stage !== undefined) parts.push(stageWords[match.stage]);
	return parts.join(', ');
}

function termWords(term: LimitTerm): string {
	if (typeof term === 'number') return `${limitText(term)} mm`;
	if ('heightOver' in term) return `height/${limitText(term.heightOver)}`;
	if ('thicknessOver' in term) return `thickness/${limitText(term.thicknessOver)}`;
	return `length/${limitText(term.lengthOver)}`;
}

/** A limit's size in words, without its sign. */
function sizeOfLimit(limit: Exclude<Limit, null | number>): string {
	if ('minus' in limit) return typeof limit.minus === 'number' ? `${limitText(limit.minus)} mm` : sizeOfLimit(limit.minus);
	if ('between' in limit) {
		const steps = limit.between.map(([sizeMm, limitMm]) => `${limitText(limitMm)} mm at ${limitText(sizeMm)} mm`);
		return `${steps.slice(0, -1).join(', ')} to ${steps.at(-1)} ${sizeWords[limit.of]}, straight between`;
	}
	if (!('greaterOf' in limit || 'lesserOf' in limit)) return termWords(limit);
	const [word, terms] = 'greaterOf' in limit ? (['greater', limit.greaterOf] as const) : (['lesser', limit.lesserOf] as const);
	return `the ${word} of ${terms.map(termWords).join(' and ')}${limit.atMost === undefined ? '' : `, at most ${limitText(limit.atMost)} mm`}`;
}

function isMirrored(lower: Limit, upper: Limit): boolean {
	if (lower === null || upper === null || typeof lower === 'number')
		return typeof lower === 'number' && typeof upper === 'number' && lower === -upper;
	return 'minus' in lower && JSON.stringify(lower.minus) === JSON.stringify(upper);
}

function sideWords(limit: Limit, sign: '+' | '−'): string {
	if (limit === null) return 'no limit';
	return typeof limit === 'number' ? `${signedLimitText(limit)} mm` : `${sign} ${sizeOfLimit(limit)}`;
}

/** "at most 6 mm from their mark", "−10 to +10 mm", "no more than the greater of 15 mm and height/400 either way". */
function limitWords({ match, lowerMm, upperMm, shape, axes }: ToleranceRule): string {
	const hasOneSide =
		(match.characteristic === 'plan' && shape !== 'box') ||
		match.characteristic === 'flatness' ||
		match.characteristic === 'flatness-best-fit';
	const from = match.characteristic === 'plan' ? ' from their mark' : '';
	if (hasOneSide) {
		if (upperMm === null) return 'no limit';
		return `at most ${typeof upperMm === 'number' ? `${limitText(upperMm)} mm` : sizeOfLimit(upperMm)}${from}`;
	}
	const along = match.characteristic === 'plan' ? ` along each ${axes === 'element' ? 'axis of the element' : 'grid axis'}` : '';
	if (lowerMm === null && upperMm === null) return 'no limit';
	if (typeof lowerMm === 'number' && typeof upperMm === 'number')
		return `${signedLimitText(lowerMm)} to ${signedLimitText(upperMm)} mm${along}`;
	if (isMirrored(lowerMm, upperMm) && upperMm !== null && typeof upperMm !== 'number')
		return `at most ${sizeOfLimit(upperMm)} either way${along}`;
	if (lowerMm === null) return `at most ${sideWords(upperMm, '+')}, no limit on the − side${along}`;
	if (upperMm === null) return `at least ${sideWords(lowerMm, '−')}, no limit on the + side${along}`;
	return `from ${sideWords(lowerMm, '−')} to ${sideWords(upperMm, '+')}${along}`;
}

/** A rule of a tolerance sheet as one sentence: "Anchor bolts in plan: at most 6 mm from their mark". */
export function ruleSentence(rule: ToleranceRule): string {
	return `${subjectWords(rule)}: ${limitWords(rule)}`;
}
