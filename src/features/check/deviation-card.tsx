import { type ReactNode, useRef } from 'react';
import type { Deviation } from '#shared/check/check-schema.ts';
import type { CheckElement } from '#shared/check/contract.ts';
import type { JudgedRow } from '#shared/check/derived/derived-row.ts';
import { deviationSentence, deviationWords } from '#shared/check/sentence.ts';
import type { Stage } from '#shared/tolerance/sheet-schema.ts';
import { useElementWidth } from '#src/lib/element-width.ts';
import { metres } from '#src/lib/format.ts';
import { rodScaleMm } from '#src/ui/rod.tsx';
import { DeviationRod, verdictClass } from './deviation-table.tsx';

interface DeviationCardProps {
	deviation: Deviation;
	element: CheckElement | null;
	/** Name of the set-up it was measured from; null where it was not. */
	setupName: string | null;
	/** Before the pour a plan offset is also said the way it has yet to go. */
	stage: Stage;
	/** The facts behind a press: on a phone the table stays in sight. */
	isFolded?: boolean;
	/** Beside the title: "Show on plan", "Close". */
	acts?: ReactNode;
}

/** Millimetres of a standard uncertainty: one decimal, because three of them are added by squares. */
function partMm(value: number): string {
	return value.toFixed(1);
}

/** "U ±3 = 2 × √(fit 1.0² ⊕ point 0.8² ⊕ common 1.0²)" in words a reader of the report can follow. */
export function uncertaintyLine({ standardUncertaintyPartsMm: parts, expandedUncertaintyMm }: Deviation): string | null {
	if (parts === null) return null;
	const known = [
		parts.fit === null ? 'fit not known' : `fit ${partMm(parts.fit)}`,
		parts.point === null ? 'point not known' : `point ${partMm(parts.point)}`,
		`common ${partMm(parts.common)}`,
	];
	const from = `${known.join(' \u2295 ')} mm`;
	return expandedUncertaintyMm === null ? `Not known to any figure: ${from}` : `\u00b1${partMm(expandedUncertaintyMm)} from ${from}`;
}

/** The sentence, with the verdict at its end in the verdict's weight and colour. */
export function JudgedSentence({ deviation, stage }: { deviation: JudgedRow; stage?: Stage }) {
	const sentence = deviationSentence(deviation, stage === undefined ? {} : { stage });
	if (deviation.deviationMm === null) return <p className="m-0">{sentence}</p>;
	// Label, what it is, what is allowed and known, the verdict: the second and the last carry the weight.
	const words = deviationWords(deviation);
	const from = deviation.label.length + 2;
	const to = sentence.startsWith(words, from) ? from + words.length : from;
	const last = sentence.slice(0, -1).lastIndexOf('. ') + 2;
	return (
		<p className="m-0">
			{sentence.slice(0, from)}
			<b>{sentence.slice(from, to)}</b>
			{sentence.slice(to, last)}
			<b className={verdictClass(deviation)}>{sentence.slice(last)}</b>
		</p>
	);
}

/** What is known of one deviation: the rod large, the sentence, where its uncertainty comes from, by which point, and its place. */
export function DeviationCard({ deviation, element, setupName, stage, isFolded = false, acts }: DeviationCardProps) {
	const box = useRef<HTMLDivElement>(null);
	const widthPx = useElementWidth(box, 486);
	const known = uncertaintyLine(deviation);
	const [east, north, height] = deviation.place;
	const facts = (
		<dl className="m-0 mt-2 grid grid-cols-[auto_1fr] gap-x-3 gap-y-0.5 text-small text-second">
			{known !== null && (
				<>
					<dt>Known to</dt>
					<dd className="m-0">{known}</dd>
				</>
			)}
			{deviation.conformity !== null && (
				<>
					<dt>Conforms</dt>
					<dd className="m-0">with a probability of {conformityText(deviation.conformity)}</dd>
				</>
			)}
			{deviation.pointName !== null && (
				<>
					<dt>Measured</dt>
					<dd className="m-0">
						by point <span className="font-mono text-ink">{deviation.pointName}</span>
						{setupName !== null && ` from set-up ${setupName}`}
						{deviation.pointCount > 1 && `, mean of ${deviation.pointCount}`}
					</dd>
				</>
			)}
			<dt>Place</dt>
			<dd className="m-0 font-mono">
				E&nbsp;{metres(east)} N&nbsp;{metres(north)} H&nbsp;{metres(height)}
			</dd>
		</dl>
	);
	return (
		<section className="sheet px-4 py-3.5 max-tablet:py-2.5" aria-label="The chosen checkpoint">
			<div className="flex items-start gap-3">
				<h2 className="m-0 min-w-0 flex-1 text-h2 leading-snug font-strong">{element?.title ?? 'Element of an earlier revision'}</h2>
				{acts}
			</div>
			<div ref={box} className="my-1.5 max-tablet:my-0.5">
				<DeviationRod
					deviation={deviation}
					scaleMm={rodScaleMm([deviation.limitsMm], [deviation.deviationMm])}
					widthPx={widthPx}
					heightPx={isFolded ? 32 : 46}
				/>
			</div>
			<div aria-live="polite">
				<JudgedSentence deviation={deviation} stage={stage} />
			</div>
			{isFolded ? (
				<details>
					<summary className="min-h-12 list-none content-center text-action underline underline-offset-3 [&::-webkit-details-marker]:hidden">
						How well it is known, and where
					</summary>
					{facts}
				</details>
			) : (
				facts
			)}
		</section>
	);
}

/** "97 %", "over 99.9 %", "under 0.1 %": never a certainty that is none. */
export function conformityText(conformity: number): string {
	if (conformity > 0.999) return 'over 99.9\u00a0%';
	if (conformity < 0.001) return 'under 0.1\u00a0%';
	const percent = conformity * 100;
	return `${percent > 99 || percent < 1 ? percent.toFixed(1) : Math.round(percent)}\u00a0%`;
}
