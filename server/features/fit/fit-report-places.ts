import { carriedPointCovariance, carryPoint, coverageFactor, fitCovarianceAt, fitInflation } from '#shared/fit/carry-point.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { FitReportData } from './fit-report-data.ts';
import { fixed } from './fit-report-words.ts';

interface Place {
	name: string;
	designM: Vector3;
	planMm: number;
	heightMm: number;
}

/**
 * How well the set-up's places are known: the best, the median and the worst known, in plan and in height, and the corners of what was measured.
 * U in mm: u² = fit² + point² + common² (GUM), times the coverage factor. Null where the fit's uncertainty is not known.
 */
export function checkedPlaces(data: FitReportData): { rows: string[][]; pointNote: string } | null {
	const { fit, setup, measured } = data;
	const factor = coverageFactor(fit.result);
	if (factor === null) return null;
	const inflation = fitInflation(fit.result) ** 2;
	const { pointSigmaM } = setup;
	const point = pointSigmaM ? carriedPointCovariance(fit.result, [pointSigmaM.plan, pointSigmaM.plan, pointSigmaM.height]) : null;
	const commonM2 = (setup.commonMm / 1000) ** 2;
	const isHeightOnly = fit.result.fit === 'height';
	const places = measured.map(({ name, surveyM }): Place => {
		const own = fitCovarianceAt(fit.result, surveyM);
		const at = (row: 0 | 1 | 2, column: 0 | 1 | 2) => inflation * own[row][column] + (point ? point[row][column] : 0);
		const [ee, en, nn] = [at(0, 0), at(0, 1), at(1, 1)];
		const long = (ee + nn) / 2 + Math.hypot((ee - nn) / 2, en);
		return {
			name,
			designM: carryPoint(fit.result, surveyM),
			planMm: isHeightOnly ? Number.NaN : 1000 * factor * Math.sqrt(long + commonM2),
			heightMm: 1000 * factor * Math.sqrt(at(2, 2) + commonM2),
		};
	});
	return {
		rows: chosenPlaces(places, isHeightOnly).map(([word, { name, designM, planMm, heightMm }]) => [
			`${word}: ${name}`,
			...designM.map((value) => fixed(value, 3)),
			fixed(planMm, 1),
			fixed(heightMm, 1),
		]),
		pointNote: point ? '' : 'The set-up states no σ of a single shot: that of each point, where its file gives one, comes on top.',
	};
}

/** Each place once, by the first thing it is. */
function chosenPlaces(places: readonly Place[], isHeightOnly: boolean): [string, Place][] {
	if (places.length === 0) return [];
	const by = (of: (place: Place) => number) => [...places].sort((a, b) => of(a) - of(b));
	const known = by(({ planMm, heightMm }) => (isHeightOnly ? heightMm : planMm));
	const heights = by(({ heightMm }) => heightMm);
	const easts = by(({ designM }) => designM[0]);
	const norths = by(({ designM }) => designM[1]);
	const chosen: [string, Place | undefined][] = [
		['best known', known[0]],
		['worst known', known.at(-1)],
		['worst in height', heights.at(-1)],
		['median', known[Math.floor(known.length / 2)]],
		['furthest west', easts[0]],
		['furthest east', easts.at(-1)],
		['furthest south', norths[0]],
		['furthest north', norths.at(-1)],
	];
	const seen = new Set<Place>();
	return chosen.flatMap(([word, place]): [string, Place][] => {
		if (!place || seen.has(place)) return [];
		seen.add(place);
		return [[word, place]];
	});
}
