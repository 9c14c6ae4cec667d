import { useMemo } from 'react';
import { type ColourSet, readToken, useColourSet } from '#src/lib/colour-set.ts';

/** A colour as the shaders take it: red, green, blue from 0 to 1, as they stand on the screen (no conversion). */
export type Rgb = readonly [number, number, number];

/** The tokens a drawing outside of CSS needs, read from the document. */
export interface SceneColours {
	readonly set: ColourSet;
	readonly sheet: Rgb;
	readonly ink: Rgb;
	readonly rule: Rgb;
	readonly modelBright: Rgb;
	readonly modelDark: Rgb;
	readonly modelEdge: Rgb;
	readonly proud: Rgb;
	readonly shy: Rgb;
	readonly close: Rgb;
	readonly glyphEdge: Rgb;
	readonly glyphRing: Rgb;
	readonly glyphDiamond: Rgb;
	readonly glyphDash: Rgb;
	readonly glyphEdgePx: number;
	readonly glyphRingPx: number;
}

/** "#9e3c09" or "#fff" → three shares of one; anything else is mid grey, so that a missing token is seen, not fatal. */
export function rgbOf(text: string): Rgb {
	const short = /^#([0-9a-f])([0-9a-f])([0-9a-f])$/i.exec(text);
	const long = /^#([0-9a-f]{2})([0-9a-f]{2})([0-9a-f]{2})$/i.exec(text);
	const parts = long?.slice(1) ?? short?.slice(1).map((digit) => digit + digit);
	if (parts === undefined) return [0.5, 0.5, 0.5];
	return parts.map((part) => Number.parseInt(part, 16) / 255) as unknown as Rgb;
}

/** The straight mixture, `share` of the second. */
export function mixed(from: Rgb, to: Rgb, share: number): Rgb {
	return [0, 1, 2].map((part) => from[part]! + (to[part]! - from[part]!) * share) as unknown as Rgb;
}

const brightness = ([red, green, blue]: Rgb): number => 0.3 * red + 0.6 * green + 0.1 * blue;

function readSceneColours(set: ColourSet): SceneColours {
	const colour = (name: `--${string}`): Rgb => rgbOf(readToken(name));
	const figure = (name: `--${string}`, otherwise: number): number => Number.parseFloat(readToken(name)) || otherwise;
	const sheet = colour('--color-sheet');
	const model = colour('--color-model');
	const modelEdge = colour('--color-model-edge');
	// On paper the sheet lights a face and the edge's tone shades it; on a dark ground it is the other way round.
	const isDark = brightness(sheet) < brightness(modelEdge);
	return {
		set,
		sheet,
		ink: colour('--color-ink'),
		rule: colour('--color-rule'),
		modelBright: isDark ? mixed(model, modelEdge, 0.12) : mixed(model, sheet, 0.7),
		modelDark: isDark ? mixed(model, sheet, 0.55) : mixed(model, modelEdge, set === 'sun' ? 0.14 : 0.2),
		modelEdge,
		proud: colour('--color-proud'),
		shy: colour('--color-shy'),
		close: colour('--color-close'),
		glyphEdge: colour('--color-glyph-edge'),
		glyphRing: colour('--color-glyph-ring'),
		glyphDiamond: colour('--color-glyph-diamond'),
		glyphDash: colour('--color-glyph-dash'),
		glyphEdgePx: figure('--glyph-edge-width', 1),
		glyphRingPx: figure('--glyph-ring-width', 2),
	};
}

/** The tokens of the colour set that is shown; a new object when the set changes. */
export function useSceneColours(): SceneColours {
	const { set } = useColourSet();
	return useMemo(() => readSceneColours(set), [set]);
}
