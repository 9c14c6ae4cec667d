import type { MapConversion } from '#shared/model/model-schema.ts';
import { signedNumber } from '#src/lib/format.ts';

/** "The model's origin is at E 512 340.120, N 218 765.400, H 31.200 m, turned 12.35°, scale 0.999 73." */
export function frameWords(conversion: MapConversion | null): string {
	if (!conversion) return 'The model says nothing of where it lies on the map.';
	const { eastings, northings, orthogonalHeight, xAxisAbscissa, xAxisOrdinate, scale, mapUnitM, crsName } = conversion;
	const turn = (Math.atan2(xAxisOrdinate, xAxisAbscissa) * 180) / Math.PI;
	const at = [eastings, northings, orthogonalHeight].map((value) => grouped(value * mapUnitM));
	return `The model’s origin is at E ${at[0]}, N ${at[1]}, H ${at[2]} m, turned ${signedNumber(turn, 4)}°, scale ${scale}${crsName ? `, in ${crsName}` : ''}.`;
}

function grouped(valueM: number): string {
	const [whole = '', fraction = ''] = signedNumber(valueM, 3).split('.');
	return `${whole.replace(/\B(?=(\d{3})+$)/g, '\u00a0')}.${fraction}`;
}
