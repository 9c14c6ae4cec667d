import { GlyphMark } from './glyph.tsx';
import type { GlyphKind } from './glyph-kind.ts';

interface RodProps {
	/** Millimetres, + proud or high; null: not measured. In plan: the distance. */
	deviationMm: number | null;
	/** Lower and upper; null on a side without a limit; null: no tolerance. */
	limitsMm: readonly [number | null, number | null] | null;
	/** U; null where it is not known. */
	expandedUncertaintyMm: number | null;
	/** What half the rod stands for: the same for all rods of a table. */
	scaleMm: number;
	glyph: GlyphKind;
	/** Its accessible name: the whole sentence. */
	sentence: string;
	/** In plan the band runs from the mark outwards and the arrow is turned. */
	isPlan?: boolean;
	turnRad?: number;
	widthPx?: number;
	heightPx?: number;
}

/** Room at each end for a glyph whose value is past it. */
const marginPx = 9;

/**
 * A deviation at a glance: staff, notches at the limits, the band between, the verdict's glyph at the value and a whisker of ±U.
 * A value past the end sits at the end.
 */
export function Rod({
	deviationMm,
	limitsMm,
	expandedUncertaintyMm,
	scaleMm,
	glyph,
	sentence,
	isPlan = false,
	turnRad = 0,
	widthPx = 176,
	heightPx = 30,
}: RodProps) {
	const middleX = widthPx / 2;
	const middleY = heightPx / 2;
	const xOf = (valueMm: number) => place(middleX + clamp(valueMm / scaleMm) * (widthPx / 2 - marginPx));
	const [lowerMm, upperMm] = limitsMm ?? [null, null];
	const bandFrom = isPlan ? middleX : lowerMm === null ? 4 : xOf(lowerMm);
	const bandTo = upperMm === null ? widthPx - 4 : xOf(upperMm);
	const hasBand = lowerMm !== null || upperMm !== null;
	const notches = [isPlan ? null : lowerMm, upperMm].filter((limit) => limit !== null && Math.abs(limit) <= scaleMm * 1.06);
	return (
		<svg
			width={widthPx}
			height={heightPx}
			viewBox={`0 0 ${widthPx} ${heightPx}`}
			role="img"
			aria-label={sentence}
			className="block shrink-0"
		>
			{hasBand && <rect x={bandFrom} y={middleY - 6} width={Math.max(0, bandTo - bandFrom)} height={12} className="fill-band" />}
			<path d={`M4 ${middleY}H${widthPx - 4}`} className="stroke-rule" />
			{notches.map((limit) => (
				<path key={limit} d={`M${xOf(limit ?? 0)} ${middleY - 10}v20`} className="stroke-ink" strokeWidth={1.8} />
			))}
			<path d={`M${middleX} ${middleY - 4}v8`} className="stroke-second" />
			{deviationMm !== null && expandedUncertaintyMm !== null && expandedUncertaintyMm > 0 && (
				<path
					d={`M${xOf(deviationMm - expandedUncertaintyMm)} ${middleY}H${xOf(deviationMm + expandedUncertaintyMm)}`}
					className={`whisker whisker-${glyph}`}
				/>
			)}
			<GlyphMark kind={glyph} x={deviationMm === null ? middleX : xOf(deviationMm)} y={middleY} turnRad={turnRad} />
		</svg>
	);
}

/** A round scale for a table's rods, so that most values lie within and the limits are well inside: 5, 10, 20, 30, 50, 100 … mm. */
export function rodScaleMm(
	limits: readonly (readonly [number | null, number | null] | null)[],
	deviationsMm: readonly (number | null)[],
): number {
	const limitSizes = limits
		.flatMap((pair) => pair ?? [])
		.filter((limit) => limit !== null)
		.map(Math.abs);
	const sizes = deviationsMm
		.filter((value) => value !== null)
		.map(Math.abs)
		.sort((a, b) => a - b);
	// The largest limit twice over, but not so wide that the common limits shrink to a line because of one gross value.
	const widest = Math.max(0, ...limitSizes);
	const usual = sizes[Math.floor(sizes.length * 0.98)] ?? 0;
	const wanted = Math.max(widest * 1.5, Math.min(usual, widest > 0 ? widest * 3 : usual), 1);
	return (
		[1, 2, 3, 5, 10, 15, 20, 30, 50, 75, 100, 150, 200, 300, 500, 1000].find((step) => step >= wanted) ?? Math.ceil(wanted / 1000) * 1000
	);
}

function clamp(fraction: number): number {
	return Math.max(-1, Math.min(1, fraction));
}

function place(x: number): number {
	return Math.round(x * 100) / 100;
}
