import type { MapConversion } from '#shared/model/model-schema.ts';
import { signedNumber } from '#src/lib/format.ts';

/**
 * "The model's origin is at E 512 340.120, N 218 765.400, H 31.200 m, turned 12.35°; 1 m of the model is 0.99973 m on the map."
 * The scale is said between metres of both sides: the file's own figure holds the change of units too.
 */
export function frameWords(conversion: MapConversion | null, metresPerUnit: number): string {
	if (!conversion) return 'The model says nothing of where it lies on the map.';
	const { eastings, northings, orthogonalHeight, xAxisAbscissa, xAxisOrdinate, scale, mapUnitM, crsName } = conversion;
	const turn = (Math.atan2(xAxisOrdinate, xAxisAbscissa) * 180) / Math.PI;
	const at = [eastings, northings, orthogonalHeight].map((value) => grouped(value * mapUnitM));
	return `The model’s origin is at E ${at[0]}, N ${at[1]}, H ${at[2]} m, turned ${Number(turn.toFixed(4))}°${crsName ? `, in ${crsName}` : ''}; 1 m of the model is ${Number(((scale * mapUnitM) / metresPerUnit).toPrecision(9))} m on the map.`;
}

function grouped(valueM: number): string {
	const [whole = '', fraction = ''] = signedNumber(valueM, 3).split(/[.,]/);
	return `${whole.replace(/\B(?=(\d{3})+$)/g, '\u00a0')}.${fraction}`;
}
