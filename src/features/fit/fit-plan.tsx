import { useMemo } from 'react';
import { coverageFactor } from '#shared/fit/carry-point.ts';
import type { FitPair, FitResult } from '#shared/fit/fit-schema.ts';
import { longAxis, type PlanExtent, uncertaintyField } from './uncertainty-field.ts';

interface FitPlanProps {
	pairs: readonly FitPair[];
	/** Null where there is no fit: the marks alone are drawn. */
	fit: FitResult | null;
	/** Grid axes of the model in plan, design frame, metres. */
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	/** The model's outline in plan, where it is known. */
	outline: PlanExtent | null;
	chosenName: string | null;
	onChoose: (name: string) => void;
	/** Below the picture, where it shows another thing than a fit's residuals. */
	caption?: string;
	/** Where the instrument will stand, design frame, metres. */
	stations?: readonly { name: string; place: readonly [number, number, number] }[];
}

const widthPx = 560;
const heightPx = 470;
/** The longest arrow reaches this far. */
const arrowPx = 34;

/**
 * The set-up's targets in plan: where they are, which way each misses (arrows to a stated exaggeration), its ellipse at 95 %,
 * and how well the fit is known about them.
 */
export function FitPlan({ pairs, fit, grid, outline, chosenName, onChoose, caption, stations = [] }: FitPlanProps) {
	const scene = useMemo(() => sceneOf(pairs, fit, outline), [pairs, fit, outline]);
	const { toX, toY, metresPerPx, marks, field, exaggeration } = scene;
	const bar = roundLength(metresPerPx * 90);
	const known = fit && coverageFactor(fit) !== null;
	return (
		<figure className="m-0">
			<svg viewBox={`0 0 ${widthPx} ${heightPx}`} className="block h-auto w-full" role="img" aria-label={wordsOf(pairs, fit, exaggeration)}>
				<rect width={widthPx} height={heightPx} className="fill-sheet" />
				{field
					.slice()
					.reverse()
					.map((level) => (
						<path
							key={level.expandedUncertaintyMm}
							d={level.rings.map((ring) => `M${ring.map(([e, n]) => `${px(toX(e))} ${px(toY(n))}`).join('L')}Z`).join('')}
							className="fill-action stroke-second"
							fillOpacity={0.045}
							strokeDasharray="1.5 4"
							strokeOpacity={0.8}
						/>
					))}
				{grid.map((axis) => {
					const first = axis.points[0];
					if (!first) return null;
					return (
						<g key={`${axis.tag}${first[0]}${first[1]}`}>
							<path
								d={`M${axis.points.map(([e, n]) => `${px(toX(e))} ${px(toY(n))}`).join('L')}`}
								fill="none"
								className="stroke-rule"
								strokeDasharray="8 3 2 3"
							/>
							<circle cx={px(toX(first[0]))} cy={px(toY(first[1]))} r={10} className="fill-sheet stroke-field" />
							<text x={px(toX(first[0]))} y={px(toY(first[1])) + 4} textAnchor="middle" className="fill-ink text-[11px]">
								{axis.tag}
							</text>
						</g>
					);
				})}
				{outline && (
					<rect
						x={px(toX(outline.minE))}
						y={px(toY(outline.maxN))}
						width={px(toX(outline.maxE) - toX(outline.minE))}
						height={px(toY(outline.minN) - toY(outline.maxN))}
						fill="none"
						className="stroke-field"
						strokeWidth={1.4}
					/>
				)}
				{field.map((level) => {
					const lowest = lowestInside(level.rings.flat(), toX, toY);
					return (
						lowest && (
							<text key={level.expandedUncertaintyMm} x={lowest[0]} y={lowest[1] - 5} textAnchor="middle" className="fill-ink text-[12px]">
								±{level.expandedUncertaintyMm >= 1000 ? `${level.expandedUncertaintyMm / 1000} m` : level.expandedUncertaintyMm}
							</text>
						)
					);
				})}
				{stations.map(({ name, place: [east, north] }) => (
					<g key={name} transform={`translate(${px(toX(east))} ${px(toY(north))})`}>
						<path d="M0 -8L7 5H-7Z" className="fill-ink" />
						<text x={10} y={5} className="fill-ink text-[13px] font-strong">
							{name}
						</text>
					</g>
				))}
				{marks.map((mark) => (
					// The table beside has the same for the keyboard.
					<g key={mark.name} onPointerDown={() => onChoose(mark.name)} className="cursor-pointer">
						{mark.name === chosenName && (
							<>
								<circle cx={mark.x} cy={mark.y} r={19} fill="none" className="stroke-ink" strokeWidth={7} />
								<circle cx={mark.x} cy={mark.y} r={19} fill="none" className="stroke-string" strokeWidth={4} />
							</>
						)}
						<circle cx={mark.x} cy={mark.y} r={24} className="fill-transparent" />
						{mark.ellipse && (
							<ellipse
								cx={mark.x}
								cy={mark.y}
								rx={mark.ellipse.longPx}
								ry={mark.ellipse.shortPx}
								transform={`rotate(${-(mark.ellipse.turnRad * 180) / Math.PI} ${mark.x} ${mark.y})`}
								className="fill-sheet stroke-action"
							/>
						)}
						<path d={`M${mark.x - 5} ${mark.y}h10M${mark.x} ${mark.y - 5}v10`} className="stroke-ink" strokeWidth={1.4} />
						{mark.arrow && (
							<path
								d={`M${mark.x} ${mark.y}l${mark.arrow[0]} ${mark.arrow[1]}`}
								className="stroke-ink"
								strokeWidth={3}
								strokeLinecap="round"
							/>
						)}
						<text x={mark.x + 13} y={mark.y - 10} className={`text-[15px] ${mark.shelf === 'in' ? 'fill-ink font-medium' : 'fill-second'}`}>
							{mark.name}
							{mark.shelf === 'held' ? ' held back' : mark.shelf === 'aside' ? ' set aside' : ''}
						</text>
					</g>
				))}
				<g transform={`translate(24 ${heightPx - 22})`}>
					<path
						d={`M0 -5v10M0 0H${px(bar / metresPerPx)}M${px(bar / metresPerPx)} -5v10`}
						fill="none"
						className="stroke-ink"
						strokeWidth={1.4}
					/>
					<text x={px(bar / metresPerPx) + 10} y={5} className="fill-ink text-[14px]">
						{bar} m{exaggeration ? ` · arrows × ${exaggeration}` : ''} · N up
					</text>
				</g>
			</svg>
			<figcaption className="border-t border-hair px-4 py-3 text-strip text-second">
				{caption
					? caption
					: known
						? 'Dotted: the fit alone is known to ± that many mm in plan. Ellipses: the residual’s 95 %. Arrows: where the fit puts the target, from its mark.'
						: 'How well this fit is known cannot be said: no σ, and no pair to spare.'}
			</figcaption>
		</figure>
	);
}

type Shelved = 'in' | 'held' | 'aside';

function sceneOf(pairs: readonly FitPair[], fit: FitResult | null, outline: PlanExtent | null) {
	const places = pairs.flatMap(({ name, control: [east, north] }) => (east === null || north === null ? [] : [{ name, east, north }]));
	const extent = extentOf(places, outline);
	const metresPerPx = Math.max((extent.maxE - extent.minE) / (widthPx - 130), (extent.maxN - extent.minN) / (heightPx - 120), 1e-6);
	const middleE = (extent.minE + extent.maxE) / 2;
	const middleN = (extent.minN + extent.maxN) / 2;
	const toX = (east: number) => widthPx / 2 + (east - middleE) / metresPerPx;
	const toY = (north: number) => heightPx / 2 - (north - middleN) / metresPerPx;
	const results = new Map(fit?.pairs.map((pair) => [pair.name, pair]));
	const longest = Math.max(0, ...(fit?.pairs ?? []).map(({ residual: [e, n] }) => Math.hypot(e ?? 0, n ?? 0)));
	const exaggeration = longest > 0 ? roundExaggeration((arrowPx * metresPerPx) / longest) : null;
	const heights = pairs.flatMap(({ control }) => (control[2] === null ? [] : [control[2]]));
	const heightM = heights.length > 0 ? heights.reduce((sum, height) => sum + height, 0) / heights.length : 0;
	const view: PlanExtent = {
		minE: middleE - (widthPx / 2 + 60) * metresPerPx,
		maxE: middleE + (widthPx / 2 + 60) * metresPerPx,
		minN: middleN - (heightPx / 2 + 60) * metresPerPx,
		maxN: middleN + (heightPx / 2 + 60) * metresPerPx,
	};
	const marks = places.map(({ name, east, north }) => {
		const pair = pairs.find((candidate) => candidate.name === name);
		const result = results.get(name);
		const shelf: Shelved = !result ? 'aside' : result.heldBack ? 'held' : 'in';
		const scale = exaggeration ? exaggeration / metresPerPx : 0;
		const [e, n] = result?.residual ?? [null, null];
		return {
			name,
			shelf,
			x: px(toX(east)),
			y: px(toY(north)),
			arrow: e !== null && n !== null && result ? ([px(e * scale), px(-n * scale)] as const) : null,
			ellipse: pair && result && exaggeration ? ellipseOf(pair, scale) : null,
		};
	});
	return { toX, toY, metresPerPx, marks, exaggeration, field: fit ? uncertaintyField(fit, view, heightM) : [] };
}

/** The 95 % ellipse of the two σ of a pair in plan, drawn as large as the arrows: 2.4477 = √χ²(0.95, 2). */
function ellipseOf(pair: FitPair, scale: number) {
	if (!pair.controlSigma || !pair.surveySigma) return null;
	// The survey's plan σ are nearly equal, so its turn is left out of the picture; the figures in the table use it.
	const axis = longAxis(pair.controlSigma[0] ** 2 + pair.surveySigma[0] ** 2, 0, pair.controlSigma[1] ** 2 + pair.surveySigma[1] ** 2);
	const size = 2.4477 * scale;
	return {
		longPx: Math.min(60, px(Math.sqrt(axis.variance) * size)),
		shortPx: Math.min(60, px(Math.sqrt(axis.shortVariance) * size)),
		turnRad: axis.turnRad,
	};
}

function extentOf(places: readonly { east: number; north: number }[], outline: PlanExtent | null): PlanExtent {
	const easts = [...places.map(({ east }) => east), ...(outline ? [outline.minE, outline.maxE] : [])];
	const norths = [...places.map(({ north }) => north), ...(outline ? [outline.minN, outline.maxN] : [])];
	if (easts.length === 0) return { minE: -10, minN: -10, maxE: 10, maxN: 10 };
	return { minE: Math.min(...easts), maxE: Math.max(...easts), minN: Math.min(...norths), maxN: Math.max(...norths) };
}

/** Where a level's figure is written: its lowest place inside the picture. */
function lowestInside(
	ring: readonly [number, number][],
	toX: (east: number) => number,
	toY: (north: number) => number,
): [number, number] | null {
	let lowest: [number, number] | null = null;
	for (const [east, north] of ring) {
		const place: [number, number] = [px(toX(east)), px(toY(north))];
		const isInside = place[0] > 20 && place[0] < widthPx - 20 && place[1] > 20 && place[1] < heightPx - 40;
		if (isInside && (lowest === null || place[1] > lowest[1])) lowest = place;
	}
	return lowest;
}

function wordsOf(pairs: readonly FitPair[], fit: FitResult | null, exaggeration: number | null): string {
	const count = `${pairs.length} ${pairs.length === 1 ? 'target' : 'targets'} in plan`;
	return fit && exaggeration ? `${count}, each with the way it misses its mark, ${exaggeration} times as long` : count;
}

/** 1, 2 or 5 times a power of ten, at most `most`. */
function roundLength(most: number): number {
	const power = 10 ** Math.floor(Math.log10(most));
	return [5, 2, 1].map((step) => step * power).find((length) => length <= most) ?? power;
}

function roundExaggeration(most: number): number {
	return most >= 1 ? Math.round(roundLength(most)) : 1;
}

function px(value: number): number {
	return Math.round(value * 10) / 10;
}
