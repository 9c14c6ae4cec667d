import { useRef } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { PourSummary } from '#shared/pour/contract.ts';
import { useColourSet } from '#src/lib/colour-set.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { counted, distanceInTime, moment } from '#src/lib/format.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';
import { nextWords, type PourStanding, pourStanding } from './pour-standing.ts';
import { PourString, PourStringHead } from './pour-string.tsx';

interface PourRowsProps {
	pours: readonly PourSummary[];
	/** Null: there is none. Undefined: on its way. */
	check: CheckDetail | null | undefined;
	isCheckTaut: boolean;
	timeZone: string;
	now: Date;
}

const rodPx = 90;

/** The pours by the hour of their concrete, each on its own string, with its worst rod. */
export function PourRows({ pours, check, isCheckTaut, timeZone, now }: PourRowsProps) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 1232);
	// The sun set's letters are an eighth larger.
	const letters = useColourSet().set === 'sun' ? 1.125 : 1;
	const timePx = 160 * letters;
	const namePx = 330;
	const isWide = widthPx >= 1080;
	const stringPx = isWide ? widthPx - timePx - namePx - rodPx - 8 : Math.min(648, widthPx - rodPx - 16);
	const standings = pours.map((pour) => (check === undefined ? null : pourStanding(pour.pourId, check, isCheckTaut)));
	const worst = standings.flatMap((standing) => standing?.worst ?? []);
	const scaleMm = rodScaleMm(
		worst.map((deviation) => deviation.limitsMm),
		worst.map((deviation) => deviation.deviationMm),
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
				{pours.map((pour, index) => {
					const standing = standings[index] ?? null;
					return (
						<li key={pour.pourId} className={`border-b border-hair py-2.5 ${isWide ? 'flex items-start' : ''}`}>
							<div className={isWide ? 'contents' : 'flex flex-wrap gap-x-4'}>
								<div
									style={isWide ? { width: timePx } : undefined}
									className={isWide ? 'shrink-0 pr-3' : 'flex w-full flex-wrap items-baseline gap-x-3 tablet:block tablet:w-44'}
								>
									<span className="block font-strong">{pour.plannedAt ? moment(pour.plannedAt, timeZone, now) : 'No hour yet'}</span>
									<span className="block text-small text-second">
										{pour.plannedAt ? distanceInTime(pour.plannedAt, now) : 'concrete not planned'}
									</span>
								</div>
								<div style={isWide ? { width: namePx } : undefined} className={isWide ? 'min-w-0 pr-3' : 'min-w-0 flex-1'}>
									<span className="block font-strong">
										Pour {pour.number}, {pour.name}
									</span>
									<span className="block min-h-[2lh] text-small text-second">
										{standing === null
											? `${counted(pour.elementCount, 'element')}, ${pour.companyName}`
											: `${standing.words}; ${pour.companyName}`}
									</span>
									{!isWide && (
										<span className="block text-small">{standing === null ? '\u00a0' : `Next: ${nextWords[standing.at % 4]}`}</span>
									)}
								</div>
							</div>
							<div className={isWide ? 'contents' : 'mt-1 flex items-start justify-between'}>
								<PourString standing={standing} widthPx={stringPx} />
								<WorstRod standing={standing} scaleMm={scaleMm} />
							</div>
						</li>
					);
				})}
			</ul>
		</div>
	);
}

function WorstRod({ standing, scaleMm }: { standing: PourStanding | null; scaleMm: number }) {
	const worst = standing?.worst;
	if (!worst) return <span className="shrink-0" style={{ width: rodPx }} />;
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
