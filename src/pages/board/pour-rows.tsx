import { useRef } from 'react';
import { Link } from 'react-router-dom';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { PourBoardRow } from '#shared/pour/contract.ts';
import { useColourSet } from '#src/lib/colour-set.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { distanceInTime, moment } from '#src/lib/format.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';
import { nextWords, PourString, PourStringHead } from './pour-string.tsx';
import { rowReason } from './row-reason.ts';

interface PourRowsProps {
	siteId: string;
	/** Null: on their way; the rows are not known yet. */
	rows: readonly PourBoardRow[];
	timeZone: string;
	now: Date;
}

const rodPx = 90;

/** The pours by the hour of their concrete, each on its own string, with its worst rod. */
export function PourRows({ siteId, rows, timeZone, now }: PourRowsProps) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 1232);
	// The sun set's letters are an eighth larger.
	const letters = useColourSet().set === 'sun' ? 1.125 : 1;
	const timePx = 160 * letters;
	const namePx = 330;
	const isWide = widthPx >= 1080;
	const stringPx = isWide ? widthPx - timePx - namePx - rodPx - 8 : Math.min(648, widthPx - rodPx - 16);
	const worst = rows.flatMap((row) => row.worst ?? []);
	const scaleMm = rodScaleMm(
		worst.map(({ limitsMm }) => limitsMm),
		worst.map(({ deviationMm }) => deviationMm),
	);
	return (
		<div ref={box}>
			{isWide && (
				<div className="flex" aria-hidden="true">
					<span style={{ width: timePx + namePx }} />
					<PourStringHead widthPx={stringPx} />
					<span className="ml-2 self-end pb-1 text-center text-small text-second" style={{ width: rodPx }}>
						worst
					</span>
				</div>
			)}
			<ul className="m-0 list-none p-0">
				{rows.map((row) => (
					<li key={row.pourId} className={`border-b border-hair py-2.5 ${isWide ? 'flex items-start' : ''}`}>
						<div className={isWide ? 'contents' : 'flex flex-wrap gap-x-4'}>
							<div
								style={isWide ? { width: timePx } : undefined}
								className={isWide ? 'shrink-0 pr-3' : 'flex w-full flex-wrap items-baseline gap-x-3 tablet:block tablet:w-44'}
							>
								<Hour row={row} timeZone={timeZone} now={now} />
							</div>
							<div style={isWide ? { width: namePx } : undefined} className={isWide ? 'min-w-0 pr-3' : 'min-w-0 flex-1'}>
								<Link
									to={`/sites/${siteId}/pours/${row.pourId}`}
									className="block font-strong text-ink no-underline hover:underline pointer-coarse:min-h-12"
								>
									Pour {row.number}, {row.name}
								</Link>
								<span className="block min-h-[2lh] text-small text-second">{rowReason(row, timeZone, now)}</span>
								{!isWide && <span className="block text-small">{row.at === null ? 'All in order' : `Next: ${nextWords[row.at % 4]}`}</span>}
							</div>
						</div>
						<div className={isWide ? 'contents' : 'mt-1 flex items-start justify-between'}>
							<PourString standing={row} isCast={row.state === 'cast' || row.state === 'cast-in-part'} widthPx={stringPx} />
							<WorstRod row={row} scaleMm={scaleMm} />
						</div>
					</li>
				))}
			</ul>
		</div>
	);
}

function Hour({ row, timeZone, now }: { row: PourBoardRow; timeZone: string; now: Date }) {
	const isCast = row.state === 'cast' || row.state === 'cast-in-part';
	const [first, second] = isCast
		? [row.state === 'cast' ? 'Cast' : 'Cast in part', row.castAt ? moment(row.castAt, timeZone, now) : '']
		: row.state === 'concreting'
			? ['Concreting', row.plannedAt ? `planned ${moment(row.plannedAt, timeZone, now)}` : '']
			: row.plannedAt
				? [moment(row.plannedAt, timeZone, now), distanceInTime(row.plannedAt, now)]
				: ['No hour yet', 'concrete not planned'];
	return (
		<>
			<span className="block font-strong">{first}</span>
			<span className="block text-small text-second">{second}</span>
		</>
	);
}

function WorstRod({ row: { worst }, scaleMm }: { row: PourBoardRow; scaleMm: number }) {
	if (worst === null) return <span className="shrink-0" style={{ width: rodPx }} />;
	return (
		<span className="mt-[5px] ml-2 shrink-0" title={deviationSentence(worst)}>
			<Rod
				deviationMm={worst.deviationMm}
				limitsMm={worst.limitsMm}
				expandedUncertaintyMm={worst.expandedUncertaintyMm}
				scaleMm={scaleMm}
				glyph={glyphKindOf(worst)}
				turnRad={planTurnRad(worst.offsetMm)}
				isPlan={worst.characteristic === 'plan'}
				sentence={`Worst: ${deviationSentence(worst)}`}
				widthPx={rodPx}
			/>
		</span>
	);
}
