import { useRef } from 'react';
import { Link } from 'react-router-dom';
import { useColourSet } from '#src/lib/colour-set.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { knotXs, knotY, stringPath } from './line-geometry.ts';

export interface LineKnot {
	key: string;
	word: string;
	/** One figure: "rev 4", "9 marks"; empty where there is none. */
	figure: string;
	/** solid: in order. half: in hand. open: nothing yet. */
	state: 'solid' | 'half' | 'open';
	/** Where it leads; null: it cannot be pressed. */
	to: string | null;
	/** Why it cannot be pressed. */
	whyNot?: string;
}

interface LineProps {
	knots: readonly LineKnot[];
	/** Where one is: this knot hangs from the line by a plumb. Null: on the site's first page. */
	placeKey: string | null;
	/** False: something rests on what is no longer the newest; the string is slack and dashed. */
	isTaut: boolean;
}

const stateWords = { solid: 'in order', half: 'in hand', open: 'nothing yet' } as const;

/** The site's work along one string: where am I, what is next. On a phone the line stays and the words go. */
export function Line({ knots, placeKey, isTaut }: LineProps) {
	const row = useRef<HTMLElement>(null);
	const widthPx = useElementWidth(row, 1280);
	const { set } = useColourSet();
	const isPhone = widthPx < 700;
	// The sun set's larger figures need the second line sooner.
	const isStacked = widthPx < (set === 'sun' ? 1400 : 1024);
	const edgePx = isPhone ? 16 : 24;
	const placeIndex = knots.findIndex((knot) => knot.key === placeKey);
	const xs = isPhone ? knots.map((_, index) => ((index + 0.5) * widthPx) / knots.length) : knotXs(knots.length, widthPx, edgePx);
	const place = placeIndex < 0 ? null : placeIndex;
	return (
		<nav
			ref={row}
			aria-label={`The line${isTaut ? '' : ', slack: something rests on what is no longer the newest'}`}
			className="relative"
			style={{ height: isPhone ? 36 : isStacked ? 84 : 66 }}
		>
			<svg width={widthPx} height={84} viewBox={`0 0 ${widthPx} 84`} aria-hidden="true" className="absolute inset-0 overflow-visible">
				<path d={stringPath(xs, widthPx, place, isTaut)} className="string-edge" strokeDasharray={isTaut ? undefined : '9 6'} />
				<path d={stringPath(xs, widthPx, place, isTaut)} className="string-core" strokeDasharray={isTaut ? undefined : '9 6'} />
				{knots.map((knot, index) => (
					<Knot key={knot.key} state={knot.state} x={xs[index] ?? 0} y={knotY(index === place)} radius={isPhone ? 4.5 : 6.5} />
				))}
				{place !== null && <Plumb x={xs[place] ?? 0} y={knotY(true) + (isPhone ? 4 : 7)} lengthPx={isPhone ? 4 : 25} />}
			</svg>
			<ul className="absolute inset-0 m-0 flex list-none p-0 px-6 max-tablet:sr-only">
				{knots.map((knot, index) => (
					<li key={knot.key} className="min-w-0 flex-1">
						<KnotWord knot={knot} isPlace={index === place} isStacked={isStacked} />
					</li>
				))}
			</ul>
		</nav>
	);
}

function KnotWord({ knot, isPlace, isStacked }: { knot: LineKnot; isPlace: boolean; isStacked: boolean }) {
	// The press area reaches from the knot to below its word.
	const form = 'block h-full pt-[27px] pl-4.5 pr-1 text-ink no-underline';
	const words = (
		<>
			<span className={isPlace ? 'font-heavy' : 'font-medium'}>{knot.word}</span>
			{knot.figure && <span className={`text-small whitespace-nowrap text-second ${isStacked ? 'block' : 'ml-1.5'}`}>{knot.figure}</span>}
			<span className="sr-only">, {stateWords[knot.state]}</span>
		</>
	);
	if (knot.to === null) {
		return (
			<span className={`${form} cursor-not-allowed`} title={knot.whyNot}>
				{words}
				{knot.whyNot && <span className="sr-only">. {knot.whyNot}</span>}
			</span>
		);
	}
	return (
		<Link
			to={knot.to}
			aria-current={isPlace ? 'page' : undefined}
			className={`${form} hover:[&>span:first-child]:underline hover:[&>span:first-child]:underline-offset-4`}
		>
			{words}
		</Link>
	);
}

interface KnotProps {
	state: LineKnot['state'];
	x: number;
	y: number;
	radius?: number;
}

/** A knot on a string: solid, half or open. */
export function Knot({ state, x, y, radius = 6.5 }: KnotProps) {
	return (
		<g transform={`translate(${x} ${y})`}>
			<circle r={radius} className={`stroke-ink ${state === 'solid' ? 'fill-ink' : 'fill-ground'}`} strokeWidth={2} />
			{state === 'half' && <path d={`M0 ${-radius}a${radius} ${radius} 0 0 0 0 ${2 * radius}z`} className="fill-ink" />}
		</g>
	);
}

/** The plumb: hangs from x, y. */
export function Plumb({ x, y, lengthPx }: { x: number; y: number; lengthPx: number }) {
	return (
		<g transform={`translate(${x} ${y})`}>
			<path d={`M0 0V${lengthPx}`} className="stroke-ink" strokeWidth={1.4} />
			<path d={`M-5.500 ${lengthPx - 3}h11l-2.200 6l-3.300 9l-3.300 -9z`} className="fill-ink" />
		</g>
	);
}
