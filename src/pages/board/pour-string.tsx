import type { PourBoardRow } from '#shared/pour/contract.ts';
import { Knot, Plumb } from '#src/ui/line.tsx';

/** The stations of a pour's string: four before the concrete, four after it. */
const stationWords = ['surveyed', 'checked', 'flags', 'released'] as const;

/** What is to come at each station. */
export const nextWords = ['to be surveyed', 'to be checked', 'flags to be settled', 'to be released'] as const;

const stateWords = { solid: 'in order', half: 'in hand', open: 'nothing yet' } as const;
const stringY = 20;

/** Nine places from end to end: four stations, the concrete, four stations. */
export function stationXs(widthPx: number): number[] {
	const edgePx = widthPx > 480 ? 34 : 10;
	return Array.from({ length: 9 }, (_, index) => edgePx + (index * (widthPx - 2 * edgePx)) / 8);
}

interface PourStringProps {
	standing: Pick<PourBoardRow, 'stations' | 'at' | 'isTaut'>;
	/** The concrete is in: its form is filled. */
	isCast: boolean;
	widthPx: number;
}

/** A pour's own string in two spans, before and after its concrete, with the plumb at what comes next. */
export function PourString({ standing, isCast, widthPx }: PourStringProps) {
	const xs = stationXs(widthPx);
	const stationX = (index: number) => xs[index < 4 ? index : index + 1] ?? 0;
	const concreteX = xs[4] ?? 0;
	// On a phone the stations stand close: the concrete must not touch them.
	const concretePx = Math.min(34, (xs[1] ?? 0) - (xs[0] ?? 0));
	const from = Math.max(0, (xs[0] ?? 0) - 14);
	// In order to its end: the string is drawn through, and no plumb hangs.
	const toX = standing.at === null ? widthPx - from : stationX(standing.at);
	const path = !standing.isTaut
		? `M${from} ${stringY}Q${(from + toX) / 2} ${stringY + Math.min(14, (toX - from) / 6)} ${toX} ${stringY}`
		: `M${from} ${stringY}H${toX}`;
	const dash = !standing.isTaut ? '9 6' : undefined;
	return (
		<svg width={widthPx} height={56} viewBox={`0 0 ${widthPx} 56`} role="img" aria-label={stringWords(standing)} className="block shrink-0">
			<path d={`M${from} ${stringY}H${widthPx - from}`} className="stroke-rule" strokeWidth={1.5} />
			<path d={path} className="string-edge" strokeDasharray={dash} />
			<path d={path} className="string-core" strokeDasharray={dash} />
			<rect
				x={concreteX - concretePx / 2}
				y={stringY - 9}
				width={concretePx}
				height={18}
				className={isCast ? 'fill-second stroke-ink' : 'fill-ground stroke-ink'}
				strokeWidth={1.5}
			/>
			{standing.stations.map((state, index) => (
				<Knot key={stationX(index)} state={state} x={stationX(index)} y={stringY} radius={6} />
			))}
			{standing.at !== null && <Plumb x={toX} y={stringY + 7} lengthPx={15} />}
		</svg>
	);
}

function stringWords({ stations, at }: PourStringProps['standing']): string {
	const said = (from: number) => stationWords.map((word, index) => `${word} ${stateWords[stations[from + index] ?? 'open']}`).join(', ');
	const next = at === null ? 'All in order' : `Next: ${nextWords[at % 4]}${at < 4 ? ' before' : ' after'} the concrete`;
	return `${next}. Before: ${said(0)}. After: ${said(4)}.`;
}

/** The stations' words above the rows. */
export function PourStringHead({ widthPx }: { widthPx: number }) {
	const xs = stationXs(widthPx);
	return (
		<svg width={widthPx} height={44} viewBox={`0 0 ${widthPx} 44`} aria-hidden="true" className="block shrink-0">
			{xs.map((x, index) => (
				<text
					key={x}
					x={x}
					y={index === 4 ? 18 : 36}
					textAnchor="middle"
					className={index === 4 ? 'fill-ink text-small font-medium' : 'fill-second text-small'}
				>
					{index === 4 ? 'concrete' : stationWords[index < 4 ? index : index - 5]}
				</text>
			))}
		</svg>
	);
}
