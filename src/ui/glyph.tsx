import type { GlyphKind } from './glyph-kind.ts';

interface GlyphMarkProps {
	kind: GlyphKind;
	/** Its middle, in the picture's units. */
	x: number;
	y: number;
	/** Half its height. */
	size?: number;
	/** Of a plan arrow: from east, counter-clockwise seen from above, radians. */
	turnRad?: number;
}

/** A verdict's glyph inside of an SVG picture. Forms as drawn; colours and edges are tokens, so the sun set outlines them in ink. */
export function GlyphMark({ kind, x, y, size = 7, turnRad = 0 }: GlyphMarkProps) {
	const turn = kind === 'plan' ? ` rotate(${round((-turnRad * 180) / Math.PI)})` : '';
	return (
		<g transform={`translate(${round(x)} ${round(y)})${turn}`}>
			{kind === 'within' ? (
				<circle r={size * 0.78} className="glyph-within" />
			) : kind === 'close' ? (
				<>
					<path d={diamondPath(size)} className="glyph-close" />
					<path d={halfDiamondPath(size)} className="glyph-close-half" />
				</>
			) : (
				<path d={glyphPath(kind, size)} className={`glyph-${kind}`} />
			)}
		</g>
	);
}

/** The outline of a glyph round x, y; y downwards. A plan arrow points east. */
export function glyphPath(kind: Exclude<GlyphKind, 'within' | 'close'>, size: number, x = 0, y = 0): string {
	const at = (right: number, down: number) => `${round(x + size * right)} ${round(y + size * down)}`;
	if (kind === 'proud') return `M${at(-0.8, -1)}L${at(1, 0)}L${at(-0.8, 1)}Z`;
	if (kind === 'shy') return `M${at(0.8, -1)}L${at(-1, 0)}L${at(0.8, 1)}Z`;
	if (kind === 'none') return `M${at(-0.8, 0)}L${at(0.8, 0)}`;
	return `M${at(-1.1, -0.28)}L${at(0, -0.28)}L${at(0, -0.9)}L${at(1.1, 0)}L${at(0, 0.9)}L${at(0, 0.28)}L${at(-1.1, 0.28)}Z`;
}

/** The diamond round x, y. */
export function diamondPath(size: number, x = 0, y = 0): string {
	return `M${round(x)} ${round(y - size)}L${round(x + size)} ${round(y)}L${round(x)} ${round(y + size)}L${round(x - size)} ${round(y)}Z`;
}

/** Its filled left half. */
export function halfDiamondPath(size: number, x = 0, y = 0): string {
	return `M${round(x)} ${round(y - size)}L${round(x)} ${round(y + size)}L${round(x - size)} ${round(y)}Z`;
}

interface GlyphProps {
	kind: GlyphKind;
	/** Side of the picture in pixels. */
	sizePx?: number;
	turnRad?: number;
	/** Said by a screen reader; leave out where the word stands beside it. */
	label?: string;
}

/** A glyph on its own, beside a word. */
export function Glyph({ kind, sizePx = 16, turnRad = 0, label }: GlyphProps) {
	const mark = <GlyphMark kind={kind} x={0} y={0} size={6} turnRad={turnRad} />;
	return label === undefined ? (
		<svg width={sizePx} height={sizePx} viewBox="-8 -8 16 16" className="shrink-0" aria-hidden="true">
			{mark}
		</svg>
	) : (
		<svg width={sizePx} height={sizePx} viewBox="-8 -8 16 16" className="shrink-0" role="img" aria-label={label}>
			{mark}
		</svg>
	);
}

function round(value: number): number {
	return Math.round(value * 100) / 100;
}
