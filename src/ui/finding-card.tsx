import type { ReactNode } from 'react';

interface FindingCardProps {
	/** A sentence a surveyor would say: "T7 is 95 mm low while its plan fits: a wrong target height?" */
	title: string;
	/** The evidence. */
	children?: ReactNode;
	/** The cures, the likeliest first. */
	acts?: ReactNode;
	/** What a cure would change: "then rms 33.4 → 1.7 mm". */
	outcome?: ReactNode;
}

/** A finding: the sentence, the evidence, and one press to try the cure. */
export function FindingCard({ title, children, acts, outcome }: FindingCardProps) {
	return (
		<section className="sheet border-l-[7px] border-l-ink px-4.5 py-4">
			<h2 className="m-0 text-h2 leading-snug font-strong">{title}</h2>
			{children && <div className="mt-1 text-second">{children}</div>}
			{(acts || outcome) && (
				<div className="mt-3 flex flex-wrap items-center gap-2.5">
					{acts}
					{outcome && <span className="text-strip text-second">{outcome}</span>}
				</div>
			)}
		</section>
	);
}
