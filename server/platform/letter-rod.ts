import type { NoticeRod } from '#shared/mail/notice.ts';
import { signedLimitText, signedMm } from '#shared/tolerance/millimetre-text.ts';

/** Steps of the staff, an odd number so that one is the middle. */
const steps = 25;

interface Mark {
	glyph: string;
	/** The light set's colour of the verdict (`src/ui/tokens.css`); mails have no set of their own. */
	colour: string;
}

function markOf({ verdict, deviationMm }: NoticeRod): Mark {
	if (verdict === 'within') return { glyph: '○', colour: '#1E5D54' };
	if (verdict !== 'outside') return { glyph: '◆', colour: '#BD820F' };
	return deviationMm < 0 ? { glyph: '◀', colour: '#6B4FA0' } : { glyph: '▶', colour: '#9E3C09' };
}

/** Where the limits and the value stand on the staff, in steps from its left end; what is past an end stands at the end. */
function placesOf({ limitsMm: [lowerMm, upperMm], deviationMm }: NoticeRod): { lower: number | null; upper: number | null; value: number } {
	const upper = upperMm ?? (lowerMm === null ? 1 : Math.max(0, -lowerMm));
	const lower = lowerMm ?? -upper;
	const middle = (lower + upper) / 2;
	const reach = Math.max(upper - lower, 1e-9);
	const stepOf = (mm: number) => Math.round(Math.min(1, Math.max(0, (mm - middle) / (2 * reach) + 0.5)) * (steps - 1));
	return {
		lower: lowerMm === null ? null : stepOf(lowerMm),
		upper: upperMm === null ? null : stepOf(upperMm),
		value: stepOf(deviationMm),
	};
}

/** "−10 to +10: +23 ±3". Millimetres. */
function figuresOf({ limitsMm: [lowerMm, upperMm], deviationMm, expandedUncertaintyMm }: NoticeRod): string {
	const decimals = expandedUncertaintyMm !== null && expandedUncertaintyMm < 1 ? 1 : 0;
	const known = expandedUncertaintyMm === null ? '' : ` ±${expandedUncertaintyMm.toFixed(decimals)}`;
	return `${limitsWords(lowerMm, upperMm)}: ${signedMm(deviationMm, decimals)}${known} mm`;
}

function limitsWords(lowerMm: number | null, upperMm: number | null): string {
	if (lowerMm !== null && upperMm !== null) return `allowed ${signedLimitText(lowerMm)} to ${signedLimitText(upperMm)}`;
	if (upperMm !== null) return `allowed at most ${signedLimitText(upperMm)}`;
	return lowerMm === null ? 'no limit' : `allowed at least ${signedLimitText(lowerMm)}`;
}

/** A staff in plain characters: "────┼──────┼───▶  allowed −10 to +10: +23 ±3 mm". */
export function rodText(rod: NoticeRod): string {
	const { lower, upper, value } = placesOf(rod);
	const staff = Array.from({ length: steps }, (_, step) => {
		if (step === value) return markOf(rod).glyph;
		return step === lower || step === upper ? '┼' : '─';
	});
	return `${staff.join('')}  ${figuresOf(rod)}`;
}

/** The same as a table of narrow cells: what every mail program draws, and nothing is fetched. A screen reader hears the figures alone. */
export function rodHtml(rod: NoticeRod): string {
	const { lower, upper, value } = placesOf(rod);
	const { glyph, colour } = markOf(rod);
	const cells = Array.from({ length: steps }, (_, step) => {
		const isLimit = step === lower || step === upper;
		const inside = step === value ? `<span style="color:${colour};font-size:14px;line-height:14px">${glyph}</span>` : isLimit ? '│' : '─';
		const ink = isLimit ? '#1B2430' : '#D8D3C7';
		return `<td style="width:7px;padding:0;text-align:center;color:${ink};font-size:14px;line-height:18px">${inside}</td>`;
	});
	return `<table role="presentation" aria-hidden="true" cellspacing="0" style="border-collapse:collapse;margin:4px 0 0"><tr>${cells.join('')}</tr></table><div style="font-size:14px;color:#56606B">${figuresOf(rod)}</div>`;
}
