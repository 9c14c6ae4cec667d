import type { Deviation } from '#shared/check/check-schema.ts';
import type { DerivedCharacteristic } from '#shared/tolerance/sheet-schema.ts';

/** The forms a verdict is drawn in. `plan` is an arrow turned as on the plan; `close` a half-filled diamond; `none` a dash. */
export const glyphKinds = ['within', 'proud', 'shy', 'plan', 'close', 'none'] as const;
export type GlyphKind = (typeof glyphKinds)[number];

/** What of a deviation decides its glyph. */
export type JudgedValue = Pick<Deviation, 'verdict' | 'deviationMm' | 'limitsMm'> & {
	readonly characteristic: Deviation['characteristic'] | DerivedCharacteristic;
};

/** The glyph of a judged value. Outside on a line: the wedge points to the limit that is passed, which with limits on one side of 0 need not be the value's sign. */
export function glyphKindOf({ verdict, characteristic, deviationMm, limitsMm }: JudgedValue): GlyphKind {
	if (verdict === 'within') return 'within';
	if (verdict === 'too-close-to-call' || verdict === 'undecided') return 'close';
	if (verdict === 'not-measured' || verdict === 'no-tolerance' || deviationMm === null) return 'none';
	if (characteristic === 'plan') return 'plan';
	const [lowerMm, upperMm] = limitsMm ?? [null, null];
	if (upperMm !== null && deviationMm > upperMm) return 'proud';
	if (lowerMm !== null && deviationMm < lowerMm) return 'shy';
	return deviationMm >= 0 ? 'proud' : 'shy';
}

/** How far a plan arrow is turned from pointing east, radians, counter-clockwise seen from above. */
export function planTurnRad(offsetMm: Deviation['offsetMm']): number {
	return offsetMm === null ? 0 : Math.atan2(offsetMm[1], offsetMm[0]);
}
