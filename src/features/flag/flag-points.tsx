import { useRef } from 'react';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { FlagDetail, FlagPoint } from '#shared/flag/contract.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { calendarDay, plainMm, signedMm, uncertaintyMm } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Notice } from '#src/ui/notice.tsx';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';

/** What was measured of the flag's element and kind: a rod for each place, the worst in words, and how it stood in each survey. */
export function FlagPoints({ flag }: { flag: FlagDetail }) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 330);
	const now = useNow();
	const seen = flag.points
		.filter(({ deviation }) => deviation.deviationMm !== null)
		.toSorted((a, b) => b.deviation.place[2] - a.deviation.place[2]);
	const notSeen = flag.points.length - seen.length;
	if (seen.length === 0) return <Notice kind="empty" title="No published check has measured this any more" />;
	const scaleMm = rodScaleMm(
		seen.map(({ deviation }) => deviation.limitsMm),
		seen.map(({ deviation }) => deviation.deviationMm),
	);
	const worst = seen.toSorted((a, b) => Math.abs(b.deviation.deviationMm ?? 0) - Math.abs(a.deviation.deviationMm ?? 0))[0]!;
	const sharedHead = sharedHeadOf(seen);
	const rodPx = Math.max(110, Math.min(sharedHead === null ? 220 : 300, widthPx - (sharedHead === null ? 190 : 170)));
	return (
		<div ref={box} className="flex flex-col gap-3">
			<section className="sheet px-4 py-3" aria-label="What was measured">
				{sharedHead !== null && <p className="m-0 mb-1 text-small text-second">{sharedHead}</p>}
				<ul className="m-0 flex list-none flex-col gap-1 p-0">
					{seen.map((point) => (
						<PointRow key={point.deviation.checkpointId} point={point} scaleMm={scaleMm} rodPx={rodPx} isHeightOnly={sharedHead !== null} />
					))}
				</ul>
				<p className="mt-2 mb-0 border-t border-t-hair pt-2">{deviationSentence(worst.deviation)}</p>
				<p className="mt-1 mb-0 text-small text-second">
					Survey {worst.surveyNumber}, {worst.surveyName}, {calendarDay(worst.measuredOn.toISOString().slice(0, 10), now)}
					{worst.isFitChecked ? '' : ', on a fit that nobody has checked yet'}
					{notSeen > 0 && ` · ${notSeen} of its places not measured`}
				</p>
			</section>
			{[...new Set(seen.flatMap(({ disagreement }) => disagreement ?? []))].map((words) => (
				<Notice key={words} kind="stale" title={words} />
			))}
			{worst.trend.length > 1 && <Trend point={worst} />}
		</div>
	);
}

const heightPattern = /^(.+), ([\d.]+ m) (above .+)$/;

/** "East face, above its base": what the labels have in common where only their heights differ; else null. */
function sharedHeadOf(points: readonly FlagPoint[]): string | null {
	const heads = points.map(({ deviation }) => heightPattern.exec(deviation.label)).map((found) => found && `${found[1]}, ${found[3]}`);
	return heads[0] != null && heads.every((head) => head === heads[0]) ? heads[0] : null;
}

interface PointRowProps {
	point: FlagPoint;
	scaleMm: number;
	rodPx: number;
	/** The rest of its label is said above. */
	isHeightOnly: boolean;
}

function PointRow({ point, scaleMm, rodPx, isHeightOnly }: PointRowProps) {
	const { deviation } = point;
	const { characteristic, deviationMm, expandedUncertaintyMm } = deviation;
	const figure = characteristic === 'plan' ? plainMm(deviationMm, expandedUncertaintyMm) : signedMm(deviationMm, expandedUncertaintyMm);
	return (
		<li className="flex min-h-9 items-center gap-2">
			<span className={`min-w-0 flex-1 leading-tight text-second ${isHeightOnly ? 'whitespace-nowrap' : 'text-small'}`}>
				{isHeightOnly ? heightPattern.exec(deviation.label)?.[2] : deviation.label}
			</span>
			<Rod
				deviationMm={deviationMm}
				limitsMm={deviation.limitsMm}
				expandedUncertaintyMm={expandedUncertaintyMm}
				scaleMm={scaleMm}
				glyph={glyphKindOf(deviation)}
				sentence={deviationSentence(deviation)}
				isPlan={characteristic === 'plan'}
				turnRad={planTurnRad(deviation.offsetMm)}
				widthPx={rodPx}
			/>
			<span className="w-18 text-right whitespace-nowrap">
				<b>{figure}</b>{' '}
				<span className="text-second">{expandedUncertaintyMm === null ? '' : `±${uncertaintyMm(expandedUncertaintyMm)}`}</span>
			</span>
		</li>
	);
}

function Trend({ point }: { point: FlagPoint }) {
	const now = useNow();
	return (
		<details className="sheet px-4 py-2">
			<summary className="min-h-11 cursor-pointer content-center font-medium">In {point.trend.length} surveys</summary>
			<table className="mb-2 w-full border-collapse text-left">
				<thead className="text-small text-second">
					<tr>
						<th className="font-medium">Survey</th>
						<th className="text-right font-medium">mm</th>
						<th className="text-right font-medium">±U</th>
					</tr>
				</thead>
				<tbody>
					{point.trend.map((one) => (
						<tr key={one.surveyNumber} className="border-t border-t-hair">
							<td className="py-1">
								{one.surveyNumber}, {calendarDay(one.measuredOn.toISOString().slice(0, 10), now)}
								{!one.isFitAdopted && ', its fit is adopted no more'}
							</td>
							<td className="py-1 text-right">{signedMm(one.deviationMm, one.expandedUncertaintyMm)}</td>
							<td className="py-1 text-right text-second">{uncertaintyMm(one.expandedUncertaintyMm)}</td>
						</tr>
					))}
				</tbody>
			</table>
		</details>
	);
}
