import type { Finding } from '../fit/fit-schema.ts';
import type { DesignPoint, MapPoint, Vector3 } from '../geometry/frame.ts';
import type { MapConversion } from '../model/model-schema.ts';

/** How the design frame lies on the map: metres on both sides. */
export interface MapFrame {
	/** Metres of the map for a metre of the design: 1, or a grid/ground factor near it. On x, y and z alike. */
	readonly scale: number;
	/** Direction of the design's x axis on the map, unit length: its easting and northing. */
	readonly xAxis: readonly [number, number];
	/** Where the design's origin lies on the map, metres. */
	readonly originM: Vector3;
}

/**
 * The map frame of a model. IfcMapConversion (ISO 16739-1; IFC 4.3 documentation): local coordinates in the project's unit, times one scale, turned
 * about z by (XAxisAbscissa, XAxisOrdinate), which need not be of unit length, then shifted; the result is in the map's unit.
 * @param metresPerUnit of the project; `mapUnitM` of the conversion is the map's
 * @throws RangeError where the axis has no length or a figure is not finite or a scale or unit not positive: no frame follows from that
 */
export function mapFrameOf(conversion: MapConversion, metresPerUnit: number): MapFrame {
	const { eastings, northings, orthogonalHeight, xAxisAbscissa, xAxisOrdinate, scale, mapUnitM } = conversion;
	const length = Math.hypot(xAxisAbscissa, xAxisOrdinate);
	const metreScale = (scale * mapUnitM) / metresPerUnit;
	if (!(length > 0 && Number.isFinite(length))) throw new RangeError('The map conversion gives its x axis no direction.');
	if (!(metreScale > 0 && Number.isFinite(metreScale) && metresPerUnit > 0 && mapUnitM > 0))
		throw new RangeError('The map conversion has no positive scale.');
	const originM: Vector3 = [eastings * mapUnitM, northings * mapUnitM, orthogonalHeight * mapUnitM];
	if (!originM.every(Number.isFinite)) throw new RangeError('The map conversion has no finite origin.');
	return { scale: metreScale, xAxis: [xAxisAbscissa / length, xAxisOrdinate / length], originM };
}

/** A place of the design on the map. Metres. */
export function designToMap({ scale, xAxis: [c, s], originM }: MapFrame, [x, y, z]: DesignPoint): MapPoint {
	return [originM[0] + scale * (c * x - s * y), originM[1] + scale * (s * x + c * y), originM[2] + scale * z];
}

/** A place of the map in the design frame. Metres. The origin is taken off first, so that map-size coordinates lose nothing. */
export function mapToDesign({ scale, xAxis: [c, s], originM }: MapFrame, [easting, northing, height]: MapPoint): DesignPoint {
	const e = (easting - originM[0]) / scale;
	const n = (northing - originM[1]) / scale;
	return [c * e + s * n, c * n - s * e, (height - originM[2]) / scale];
}

/**
 * The same for a control point that may lack its plan or its height: easting and northing come and go together.
 * A benchmark's height alone can be carried, since the turn is about z.
 */
export function partialMapToDesign(
	frame: MapFrame,
	[easting, northing, height]: readonly [number | null, number | null, number | null],
): [number | null, number | null, number | null] {
	const plan = easting === null || northing === null ? null : mapToDesign(frame, [easting, northing, frame.originM[2]]);
	return [plan?.[0] ?? null, plan?.[1] ?? null, height === null ? null : (height - frame.originM[2]) / frame.scale];
}

/** Further from 1 than any grid/ground factor on land; the reading of a model asks from there on too. */
const oddScale = 0.002;

/**
 * Whether the scale contradicts the two units, as where a file in millimetres leaves out a scale of 0.001: what the file says (the standard
 * takes an absent scale as 1) and what the units would give. Null where they agree, or a person chose which holds.
 */
export function mapScaleFinding(conversion: MapConversion, metresPerUnit: number): Finding | null {
	const { scale, mapUnitM, chosenScale } = conversion;
	if (chosenScale !== undefined) return null;
	const metreScale = (scale * mapUnitM) / metresPerUnit;
	if (Math.abs(metreScale - 1) <= oddScale) return null;
	const expected = metresPerUnit / mapUnitM;
	return {
		code: 'map-scale',
		pairs: [],
		message: `The map conversion's scale ${scale} makes a metre of the design ${Number(metreScale.toPrecision(6))} m of the map; the units of project and map give ${Number(expected.toPrecision(6))}. Choose which is meant.`,
		evidence: { scale, expectedScale: expected, metreScale },
	};
}
