import { carryPoint } from '#shared/fit/carry-point.ts';
import type { Pen, ReportBlock } from '../../platform/pdf/report-blocks.ts';
import type { FitReportData } from './fit-report-data.ts';

const heightPt = 300;
/** The longest arrow, points. */
const arrowPt = 26;
/** More measured places than this are a cloud: every so many of them is drawn. */
const mostDots = 1500;

interface PlanPlace {
	name: string;
	east: number;
	north: number;
}

/** The plan sketch: targets, held-back checks and set-aside marks, the survey frame's origin, what was measured, and how each target misses its mark. */
export function planFigure(data: FitReportData): ReportBlock {
	const { fit } = data;
	const results = new Map(fit.result.pairs.map((pair) => [pair.name, pair]));
	const marks = fit.pairs.pairs.flatMap(({ name, control: [east, north] }): PlanPlace[] =>
		east === null || north === null ? [] : [{ name, east, north }],
	);
	const isPlanKnown = fit.result.fit !== 'height';
	const every = Math.max(1, Math.ceil(data.measured.length / mostDots));
	const dots = isPlanKnown
		? data.measured.filter((_, index) => index % every === 0).map(({ name, surveyM }) => placeOf(name, carryPoint(fit.result, surveyM)))
		: [];
	const station = isPlanKnown && isOriginNear(data) ? placeOf('origin', carryPoint(fit.result, [0, 0, 0])) : null;
	const extent = [...marks, ...dots];
	const longest = Math.max(0, ...fit.result.pairs.map(({ residual: [e, n] }) => Math.hypot(e ?? 0, n ?? 0)));
	const held = fit.result.pairs.filter(({ heldBack }) => heldBack).length;
	return {
		kind: 'figure',
		alt: `Plan sketch, north up: ${marks.length} targets, ${held} of them held back, ${data.measuredCount} measured places; each target with the way it misses its mark.`,
		heightPt,
		draw: (pen, box) => {
			if (extent.length === 0) return pen.word('No place is known in plan.', box.x, box.y);
			const view = viewOf(extent, box);
			for (const axis of data.grid) {
				const points = axis.points.map(([east, north]) => view.place(east, north));
				if (points.every(([x, y]) => view.isInside(x, y))) {
					pen.line(points, { widthPt: 0.4, dash: [5, 2], grey: true });
					const [first] = points;
					if (first) pen.word(axis.tag, first[0] - 3, first[1] + 2, 6.5);
				}
			}
			for (const { east, north } of dots) pen.dot(...view.place(east, north), 0.5);
			const exaggeration = longest > 0 ? roundDown((arrowPt * view.metresPerPt) / longest) : null;
			for (const { name, east, north } of marks)
				drawMark(pen, view.place(east, north), name, results.get(name), exaggeration, view.metresPerPt);
			if (station) drawOrigin(pen, view, station);
			drawScale(pen, box, view.metresPerPt, exaggeration);
		},
	};
}

/** Only where it lies in the picture: it must not make the work small. */
function drawOrigin(pen: Pen, { place, isInside }: ReturnType<typeof viewOf>, { east, north }: PlanPlace): void {
	const [x, y] = place(east, north);
	if (!isInside(x, y)) return;
	pen.line([
		[x - 4, y + 3],
		[x + 4, y + 3],
		[x, y - 4],
		[x - 4, y + 3],
	]);
	pen.word('origin of the survey frame', x + 6, y - 3);
}

function drawMark(
	pen: Pen,
	[x, y]: readonly [number, number],
	name: string,
	result: FitReportData['fit']['result']['pairs'][number] | undefined,
	exaggeration: number | null,
	metresPerPt: number,
): void {
	pen.line([
		[x - 3.5, y],
		[x + 3.5, y],
	]);
	pen.line([
		[x, y - 3.5],
		[x, y + 3.5],
	]);
	const word = !result ? ' (set aside)' : result.heldBack ? ' (held back)' : '';
	if (result?.heldBack) pen.ring(x, y, 6);
	pen.word(`${name}${word}`, x + 7, y - 10);
	const [e, n] = result?.residual ?? [null, null];
	if (e === null || n === null || exaggeration === null) return;
	pen.line(
		[
			[x, y],
			[x + (e * exaggeration) / metresPerPt, y - (n * exaggeration) / metresPerPt],
		],
		{ widthPt: 1.8 },
	);
}

function drawScale(pen: Pen, box: Box, metresPerPt: number, exaggeration: number | null): void {
	const length = roundDown(metresPerPt * 90);
	const y = box.y + box.height - 8;
	const end = box.x + 4 + length / metresPerPt;
	pen.line([
		[box.x + 4, y],
		[end, y],
	]);
	pen.line([
		[box.x + 4, y - 3],
		[box.x + 4, y + 3],
	]);
	pen.line([
		[end, y - 3],
		[end, y + 3],
	]);
	pen.word(`${length} m; north is up${exaggeration ? `; arrows ${exaggeration} times as long as the misfit` : ''}`, end + 6, y - 5);
	pen.line(
		[
			[box.x, box.y],
			[box.x + box.width, box.y],
			[box.x + box.width, box.y + box.height],
			[box.x, box.y + box.height],
			[box.x, box.y],
		],
		{ widthPt: 0.4, grey: true },
	);
}

interface Box {
	x: number;
	y: number;
	width: number;
	height: number;
}

function viewOf(places: readonly PlanPlace[], box: Box) {
	const easts = places.map(({ east }) => east);
	const norths = places.map(({ north }) => north);
	const [west, east] = [least(easts), -least(easts.map((value) => -value))];
	const [south, north] = [least(norths), -least(norths.map((value) => -value))];
	const metresPerPt = Math.max((east - west) / (box.width - 130), (north - south) / (box.height - 70), 1e-6);
	const middle = [(west + east) / 2, (south + north) / 2] as const;
	return {
		metresPerPt,
		place: (e: number, n: number): [number, number] => [
			box.x + box.width / 2 + (e - middle[0]) / metresPerPt,
			box.y + box.height / 2 - 6 - (n - middle[1]) / metresPerPt,
		],
		isInside: (x: number, y: number) => x > box.x + 4 && x < box.x + box.width - 4 && y > box.y + 4 && y < box.y + box.height - 18,
	};
}

function least(values: readonly number[]): number {
	return values.reduce((smallest, value) => Math.min(smallest, value), Number.POSITIVE_INFINITY);
}

function placeOf(name: string, [east, north]: readonly [number, number, number]): PlanPlace {
	return { name, east, north };
}

/** The origin of the survey frame is worth drawing where the targets lie about it, not thousands of metres away. */
function isOriginNear({ fit }: FitReportData): boolean {
	const reaches = fit.pairs.pairs.map(({ survey: [x, y] }) => Math.hypot(x ?? 0, y ?? 0));
	return reaches.length > 0 && Math.max(...reaches) < 500;
}

/** 1, 2 or 5 times a power of ten, at most `most`. */
function roundDown(most: number): number {
	const power = 10 ** Math.floor(Math.log10(most));
	return [5, 2, 1].map((step) => step * power).find((value) => value <= most) ?? power;
}
