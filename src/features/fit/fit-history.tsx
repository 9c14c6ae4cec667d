import { Link } from 'react-router-dom';
import type { FitSummary } from '#shared/fit/contract.ts';
import { isoMoment } from '#src/lib/format.ts';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import { kindWords } from './fit-words.ts';

interface FitHistoryProps {
	fits: readonly FitSummary[];
	timeZone: string;
	/** Where a fit is looked at: the address for its id. */
	addressOf: (fitId: string) => string;
	shownFitId: string | null;
}

const stateWords: Record<FitSummary['state'], string> = { made: 'made, not adopted', adopted: 'adopted', superseded: 'superseded' };

/** The fits of a set-up, newest first: none is ever edited. */
export function FitHistory({ fits, timeZone, addressOf, shownFitId }: FitHistoryProps) {
	if (fits.length === 0) return <p className="m-0 text-second">No fit of this set-up has been kept yet.</p>;
	return (
		<div ref={scrollStop} className="sheet overflow-x-auto">
			<table className="w-full border-collapse">
				<thead className="border-b border-ink text-small text-second">
					<tr>
						{['Fit', 'Pairs', 'rms, mm', 'State', 'By and when', 'What changed, and why it was adopted'].map((head, index) => (
							<th key={head} scope="col" className={`px-3 py-2.5 font-medium ${index === 1 || index === 2 ? 'text-right' : 'text-left'}`}>
								{head}
							</th>
						))}
					</tr>
				</thead>
				<tbody>
					{fits.map((fit, index) => (
						<tr key={fit.fitId} className={`border-b border-hair ${fit.fitId === shownFitId ? 'row-chosen' : ''}`}>
							<th scope="row" className="h-11 px-3 text-left font-strong whitespace-nowrap">
								<Link to={addressOf(fit.fitId)} className="inline-flex min-h-9 items-center text-action underline underline-offset-3">
									Fit {fit.number}
								</Link>
							</th>
							<td className="px-3 text-right">{fit.pairCount}</td>
							<td className="px-3 text-right">{(fit.rmsM * 1000).toFixed(1)}</td>
							<td className={`px-3 whitespace-nowrap ${fit.state === 'adopted' ? 'font-strong' : ''}`}>{stateWords[fit.state]}</td>
							<td className="px-3 py-2 whitespace-nowrap">
								{fit.adoptedBy ?? fit.madeBy}
								<span className="block text-second">{isoMoment(fit.adoptedAt ?? fit.madeAt, timeZone)}</span>
								{fit.checkedBy && <span className="block text-small text-second">checked by {fit.checkedBy}</span>}
							</td>
							<td className="min-w-56 px-3 py-2">
								{fit.changes.length > 0
									? fit.changes.join(' ')
									: index === fits.length - 1
										? `The first: ${kindWords[fit.kind]}.`
										: 'Nothing in what went in.'}
								{fit.adoptedReason && <span className="block text-small text-second">“{fit.adoptedReason}”</span>}
							</td>
						</tr>
					))}
				</tbody>
			</table>
		</div>
	);
}
