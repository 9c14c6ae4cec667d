import { type MouseEvent, useMemo, useRef } from 'react';
import { useElementWidth } from '#src/lib/element-width.ts';
import { diamondPath, GlyphMark, glyphPath, halfDiamondPath } from './glyph.tsx';
import type { GlyphKind } from './glyph-kind.ts';

/** One deviation on the wide rod. */
export interface WideRodTick {
	id: string;
	glyph: GlyphKind;
	deviationMm: number;
	limitsMm: readonly [number | null, number | null];
	isPlan: boolean;
}

interface WideRodProps {
	/** All that have a value and limits; thousands are well. */
	ticks: readonly WideRodTick[];
	/** Says in words what it shows: "371 within, 11 proud, 7 shy, 9 too close to call". */
	summary: string;
	chosenId?: string | null;
	/** A press takes the nearest. The table offers the same to the keyboard. */
	onChoose?: (id: string) => void;
}

const heightPx = 58;
const middleY = 29;
/** How many half-bands lie between the middle and each end. */
const reach = 2.652;
const edgePx = 8;

/**
 * Where a deviation lies against its own limits: −1 at the lower, +1 at the upper, 0 half-way.
 * In plan, and with a limit on one side only: 0 at the design, ±1 at the limit.
 */
export function shareOfLimits({ deviationMm, limitsMm, isPlan }: Pick<WideRodTick, 'deviationMm' | 'limitsMm' | 'isPlan'>): number {
	const [lowerMm, upperMm] = limitsMm;
	if (isPlan || lowerMm === null) return upperMm === null || upperMm <= 0 ? 0 : deviationMm / upperMm;
	if (upperMm === null) return lowerMm === 0 ? 0 : deviationMm / Math.abs(lowerMm);
	const half = (upperMm - lowerMm) / 2;
	return half <= 0 ? 0 : (deviationMm - (upperMm + lowerMm) / 2) / half;
}

/** A whole check on one staff: every deviation a tick against its own limits, and only what is off a glyph. One path per kind, so 5 000 cost as few nodes as ten. */
export function WideRod({ ticks, summary, chosenId = null, onChoose }: WideRodProps) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 1232);
	const middleX = widthPx / 2;
	const halfBandPx = (widthPx / 2 - edgePx) / reach;
	const placed = useMemo(() => {
		const endPx = widthPx / 2 - edgePx - 8;
		return ticks.map((tick) => ({
			...tick,
			x: middleX + Math.max(-endPx, Math.min(endPx, shareOfLimits(tick) * halfBandPx)),
		}));
	}, [ticks, widthPx, middleX, halfBandPx]);
	const paths = useMemo(() => pathsOf(placed), [placed]);
	const chosen = placed.find((tick) => tick.id === chosenId);

	const choose = (event: MouseEvent<HTMLDivElement>) => {
		if (!onChoose || placed.length === 0) return;
		const x = event.clientX - event.currentTarget.getBoundingClientRect().left;
		// Off before within: what stands out is what is meant.
		const near = (tick: (typeof placed)[number]) => Math.abs(tick.x - x) + (tick.glyph === 'within' ? 6 : 0);
		onChoose(placed.reduce((best, tick) => (near(tick) < near(best) ? tick : best)).id);
	};

	return (
		<div ref={box} className="h-[58px] w-full overflow-hidden" onClickCapture={onChoose ? choose : undefined}>
			<svg width={widthPx} height={heightPx} viewBox={`0 0 ${widthPx} ${heightPx}`} role="img" aria-label={summary} className="block">
				<rect x={middleX - halfBandPx} y={12} width={halfBandPx * 2} height={34} className="fill-band" />
				<path d={`M${edgePx} ${middleY}H${widthPx - edgePx}`} className="stroke-rule" />
				<path d={`M${middleX - halfBandPx} 6v46M${middleX + halfBandPx} 6v46`} className="stroke-ink" strokeWidth={2} />
				<path d={`M${middleX} 22v14`} className="stroke-second" />
				<path d={paths.within} className="stroke-within" strokeOpacity={0.45} />
				<path d={paths.close} className="glyph-close" />
				<path d={paths.closeHalf} className="glyph-close-half" />
				<path d={paths.plan} className="glyph-plan" />
				<path d={paths.proud} className="glyph-proud" />
				<path d={paths.shy} className="glyph-shy" />
				{chosen && (
					<g>
						<circle cx={chosen.x} cy={middleY} r={13} className="fill-none stroke-ink" strokeWidth={6} />
						<circle cx={chosen.x} cy={middleY} r={13} className="fill-none stroke-string" strokeWidth={3} />
						<GlyphMark kind={chosen.glyph} x={chosen.x} y={middleY} />
					</g>
				)}
				<text x={middleX - halfBandPx - 8} y={52} textAnchor="end" className="fill-second text-small">
					lower limit
				</text>
				<text x={middleX + halfBandPx + 8} y={52} className="fill-second text-small">
					upper limit
				</text>
			</svg>
		</div>
	);
}

type Placed = WideRodTick & { x: number };

function pathsOf(placed: readonly Placed[]) {
	const drawn = (kind: GlyphKind, path: (x: number) => string) =>
		placed
			.filter((tick) => tick.glyph === kind)
			.map((tick) => path(tick.x))
			.join('');
	return {
		within: drawn('within', (x) => `M${Math.round(x * 10) / 10} 21v16`),
		close: drawn('close', (x) => diamondPath(6, x, middleY)),
		closeHalf: drawn('close', (x) => halfDiamondPath(6, x, middleY)),
		// All distances in plan count outwards: one form for all of them here, turned arrows in the table and on the plan.
		plan: drawn('plan', (x) => glyphPath('plan', 7, x, middleY)),
		proud: drawn('proud', (x) => glyphPath('proud', 7, x, middleY)),
		shy: drawn('shy', (x) => glyphPath('shy', 7, x, middleY)),
	};
}
