import { memo, useMemo } from 'react';
import { diamondPath, glyphPath, halfDiamondPath } from '#src/ui/glyph.tsx';
import type { GlyphKind } from '#src/ui/glyph-kind.ts';
import type { PlanScale } from '#src/ui/plan-stage.tsx';
import { type DeviationMark, drawingOrder, hasLine, ringRadiusPx } from './deviation-mark.ts';

interface DeviationPlanProps {
	marks: readonly DeviationMark[];
	/** Lines are drawn so many times as long as the deviation. */
	times: number;
	scale: PlanScale;
}

const sizePx = 7;

const colourOfLine: Partial<Record<GlyphKind, string>> = {
	proud: 'whisker-proud',
	plan: 'whisker-plan',
	shy: 'whisker-shy',
	close: 'whisker-close',
};

/** A drawn form as its corners, y downwards: "M−5.6 −7L7 0L…Z" → pairs. H and V are written out. */
function cornersOf(path: string): [number, number][] {
	let at: [number, number] = [0, 0];
	return [...path.matchAll(/([MLHV])(-?[\d.]+)(?: (-?[\d.]+))?/g)].map(([, step, first, second]) => {
		at = step === 'H' ? [Number(first), at[1]] : step === 'V' ? [at[0], Number(first)] : [Number(first), Number(second)];
		return at;
	});
}

const forms = {
	proud: cornersOf(glyphPath('proud', sizePx)),
	// Turned along its deviation, so it is the same wedge.
	shy: cornersOf(glyphPath('proud', sizePx)),
	plan: cornersOf(glyphPath('plan', sizePx)),
	close: cornersOf(diamondPath(sizePx)),
	half: cornersOf(halfDiamondPath(sizePx)),
};

/** Which way a glyph points on paper: along its deviation; a height up or down. */
function turnOf({ kind, shiftM }: DeviationMark): readonly [number, number] {
	const planM = shiftM === null ? 0 : Math.hypot(shiftM[0], shiftM[1]);
	if (shiftM !== null && planM > 1e-9) return [shiftM[0] / planM, -shiftM[1] / planM];
	return [0, kind === 'shy' ? 1 : -1];
}

function formAt(corners: readonly [number, number][], x: number, y: number, [cosine, sine]: readonly [number, number]): string {
	return `${corners.map(([a, b], i) => `${i === 0 ? 'M' : 'L'}${(x + a * cosine - b * sine).toFixed(1)} ${(y + a * sine + b * cosine).toFixed(1)}`).join('')}Z`;
}

function formOf(mark: DeviationMark, x: number, y: number, ringPx: number): string {
	const [left, top] = [x.toFixed(1), y.toFixed(1)];
	if (mark.kind === 'within')
		return `M${(x - ringPx).toFixed(1)} ${top}a${ringPx} ${ringPx} 0 1 0 ${2 * ringPx} 0a${ringPx} ${ringPx} 0 1 0 ${-2 * ringPx} 0`;
	if (mark.kind === 'none') return `M${(x - 5).toFixed(1)} ${top}h10`;
	return mark.kind === 'close' ? formAt(forms.close, Number(left), y, [1, 0]) : formAt(forms[mark.kind], x, y, turnOf(mark));
}

/** The deviations from above: one path a form, so that 5 000 cost as few nodes as ten; lines as in the model. */
export const DeviationPlan = memo(function DeviationPlan({ marks, times, scale }: DeviationPlanProps) {
	const drawn = useMemo(() => {
		const glyphs = new Map<GlyphKind, string[]>();
		const lines = new Map<GlyphKind, string[]>();
		const halves: string[] = [];
		const ringPx = ringRadiusPx(marks.length);
		const put = (to: Map<GlyphKind, string[]>, kind: GlyphKind, path: string) => {
			const paths = to.get(kind);
			if (paths === undefined) to.set(kind, [path]);
			else paths.push(path);
		};
		for (const mark of marks) {
			const [x, y] = [scale.x(mark.place[0]), scale.y(mark.place[1])];
			put(glyphs, mark.kind, formOf(mark, x, y, ringPx));
			if (mark.kind === 'close') halves.push(formAt(forms.half, x, y, [1, 0]));
			const [east, north] = mark.shiftM ?? [0, 0];
			if (!hasLine(mark) || (east === 0 && north === 0)) continue;
			const [toX, toY] = [x + east * times * scale.pxPerM, y - north * times * scale.pxPerM];
			put(lines, mark.kind, `M${x.toFixed(1)} ${y.toFixed(1)}L${toX.toFixed(1)} ${toY.toFixed(1)}`);
		}
		return {
			glyphs: drawingOrder.map((kind) => ({ kind, path: (glyphs.get(kind) ?? []).join('') })).filter(({ path }) => path !== ''),
			lines: [...lines].map(([kind, paths]) => ({ kind, path: paths.join('') })),
			halves: halves.join(''),
		};
	}, [marks, times, scale]);
	return (
		<>
			{drawn.lines.map(({ kind, path }) => (
				<path key={kind} d={path} fill="none" className={colourOfLine[kind]} strokeWidth={2.4} />
			))}
			{drawn.glyphs.map(({ kind, path }) => (
				<g key={kind}>
					<path d={path} className={`glyph-${kind}`} {...(kind === 'within' && marks.length > 600 && { style: { strokeWidth: 1.3 } })} />
					{kind === 'close' && <path d={drawn.halves} className="glyph-close-half" />}
				</g>
			))}
		</>
	);
});

/** The chosen one in its ring, over all others. */
export function ChosenMark({ mark, scale }: { mark: DeviationMark; scale: PlanScale }) {
	return (
		<g transform={`translate(${scale.x(mark.place[0]).toFixed(1)} ${scale.y(mark.place[1]).toFixed(1)})`}>
			<circle r={14} className="string-edge" />
			<circle r={14} className="string-core" />
			<path d={formOf(mark, 0, 0, ringRadiusPx(0))} className={`glyph-${mark.kind}`} />
			{mark.kind === 'close' && <path d={formAt(forms.half, 0, 0, [1, 0])} className="glyph-close-half" />}
		</g>
	);
}
