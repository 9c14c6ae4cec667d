import { Children, type MouseEvent, useMemo, useRef } from 'react';
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
	const layers = useMemo(() => tickLayers(placed.filter((tick) => tick.glyph === 'within').map((tick) => tick.x)), [placed]);
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
				{layers.map((layer) => (
					<path key={layer.key} d={layer.path} className="stroke-within" strokeOpacity={layer.opacity} />
				))}
				{offKinds.map((kind) => (
					<OffGlyphs key={kind} kind={kind} xs={placed.filter((tick) => tick.glyph === kind).map((tick) => tick.x)} />
				))}
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

/** Drawn in this order, so that what is worst lies on top. */
const offKinds = ['close', 'plan', 'proud', 'shy'] as const;
const manyGlyphs = 40;

/** The glyphs of one kind: each with its own edge while they can be told apart, as one mass with one edge where they are many. */
function OffGlyphs({ kind, xs }: { kind: (typeof offKinds)[number]; xs: readonly number[] }) {
	const size = kind === 'close' ? 6 : 7;
	if (xs.length <= manyGlyphs) {
		// Keys of their places: two may stand on the same pixel.
		return Children.toArray(xs.map((x) => [<GlyphMark key={x} kind={kind} x={x} y={middleY} size={size} />]));
	}
	const drawn = (path: (x: number) => string) => xs.map(path).join('');
	return kind === 'close' ? (
		<g style={{ paintOrder: 'stroke' }}>
			<path d={drawn((x) => diamondPath(size, x, middleY))} className="glyph-close" />
			<path d={drawn((x) => halfDiamondPath(size, x, middleY))} className="glyph-close-half" />
		</g>
	) : (
		<path d={drawn((x) => glyphPath(kind, size, x, middleY))} className={`glyph-${kind}`} style={{ paintOrder: 'stroke' }} />
	);
}

const mostLayers = 6;

/**
 * Ticks as a few paths one over the other: where several fall on the same pixel the column grows darker, up to the fullest one,
 * so that thousands still show where most lie. Pixels; pure.
 */
export function tickLayers(xs: readonly number[]): { key: string; path: string; opacity: number }[] {
	const counts = new Map<number, number>();
	for (const x of xs) counts.set(Math.round(x), (counts.get(Math.round(x)) ?? 0) + 1);
	const fullest = Math.max(0, ...counts.values());
	const layerCount = Math.min(fullest, mostLayers);
	return Array.from({ length: layerCount }, (_, layer) => ({
		key: `layer ${layer}`,
		path: [...counts].flatMap(([x, count]) => (count * layerCount > layer * fullest ? [`M${x}.5 21v16`] : [])).join(''),
		opacity: layerCount <= 3 ? 0.45 : 0.25,
	}));
}
