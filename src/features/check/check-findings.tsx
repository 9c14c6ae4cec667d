import { memo } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import { counted } from '#src/lib/format.ts';

interface CheckFindingsProps {
	findings: CheckDetail['findings'];
	unmatchedPoints: CheckDetail['unmatchedPoints'];
	/** What persons left out before the check, with their reasons. */
	leftOut: NonNullable<CheckDetail['leftOut']>;
	setupNameOf: (setupId: string) => string | null;
}

/** Beyond this many the rest is counted, not listed: nobody reads the fortieth. */
const mostListed = 40;

/** What a surveyor would say of the whole: the first finding in the line, all of them behind it. */
export const CheckFindings = memo(function CheckFindings({ findings, unmatchedPoints, leftOut, setupNameOf }: CheckFindingsProps) {
	const total = findings.length + (unmatchedPoints.length > 0 ? 1 : 0);
	const leftOutCount = leftOut.reduce((sum, { count }) => sum + count, 0);
	const leftOutWords = `${counted(leftOutCount, 'checkpoint')} ${leftOutCount === 1 ? 'was' : 'were'} left out of this check by persons.`;
	if (total === 0 && leftOutCount === 0) return null;
	const unmatchedWords = `${counted(unmatchedPoints.length, 'point')} of the survey met no checkpoint.`;
	const first = findings[0]?.message ?? (unmatchedPoints.length > 0 ? unmatchedWords : leftOutWords);
	return (
		<details className="sheet group min-w-0 border-l-[7px] border-l-ink px-4 [&[open]>summary]:border-b [&[open]>summary]:border-b-hair">
			<summary className="flex min-h-9.5 list-none items-center gap-3 py-1 pointer-coarse:min-h-12 [&::-webkit-details-marker]:hidden">
				<span className="line-clamp-2 min-w-0 flex-1 leading-tight group-open:invisible">
					{total > 0 && <b>{counted(total, 'finding')}.</b>} {first}
					{total > 0 && leftOutCount > 0 && <span className="text-second"> {leftOutWords}</span>}
				</span>
				<span className="shrink-0 text-action underline underline-offset-3">
					<span className="group-open:hidden">Read</span>
					<span className="hidden group-open:inline">Fold</span>
				</span>
			</summary>
			<ul className="m-0 max-h-[40dvh] list-none overflow-auto p-0 py-2">
				{findings.slice(0, mostListed).map((finding) => (
					<li key={`${finding.code} ${finding.message} ${finding.pairs.join()}`} className="py-1">
						{finding.message}
						{finding.pairs.length > 0 && <span className="block font-mono text-small text-second">{listed(finding.pairs)}</span>}
					</li>
				))}
				{findings.length > mostListed && <li className="py-1 text-second">and {counted(findings.length - mostListed, 'more finding')}.</li>}
				{unmatchedPoints.length > 0 && (
					<li className="py-1">
						{unmatchedWords}
						<ul className="m-0 list-none p-0 text-small text-second">
							{unmatchedPoints.slice(0, mostListed).map((point) => (
								<li key={`${point.setupId} ${point.name}`}>
									<span className="font-mono text-ink">{point.name}</span>
									{setupNameOf(point.setupId) !== null && ` (set-up ${setupNameOf(point.setupId)})`}: {point.reason}
								</li>
							))}
							{unmatchedPoints.length > mostListed && <li>and {counted(unmatchedPoints.length - mostListed, 'more')}.</li>}
						</ul>
					</li>
				)}
				{leftOutCount > 0 && (
					<li className="py-1">
						{leftOutWords}
						<ul className="m-0 list-none p-0 text-small text-second">
							{leftOut.map(({ reason, by, count }) => (
								<li key={`${by} ${reason}`}>
									<span className="font-mono text-ink">{count}</span>: {reason} ({by})
								</li>
							))}
						</ul>
					</li>
				)}
			</ul>
		</details>
	);
});

function listed(names: readonly string[]): string {
	return names.length > 12 ? `${names.slice(0, 12).join(', ')} and ${names.length - 12} more` : names.join(', ');
}
