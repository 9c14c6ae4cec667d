import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { Link } from 'react-router-dom';
import type { FitDetail, FitSummary, SurveyorInCharge } from '#shared/fit/contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { noFigure, signedNumber } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import { StandDialog } from './fit-dialogs.tsx';

interface NetworkFitProps {
	fit: FitDetail;
	/** Where a fit of a set-up is looked at. */
	addressOf: (setupId: string, fitId: string) => string;
}

/** What a fit that was made together with others rests on: the other set-ups, and the targets that tie them, each with how well it fits. */
export function NetworkFit({ fit: { network, madeWith, setupId, result }, addressOf }: NetworkFitProps) {
	if (network === null || madeWith === null) return null;
	const others = madeWith.fits.filter((other) => other.setupId !== setupId);
	const ties = network.ties.filter(({ setupIds }) => setupIds.includes(setupId) && setupIds.length > 1);
	const { chiSquare } = result;
	return (
		<section aria-label="Adjusted together" className="sheet flex flex-col gap-2 px-4.5 py-3.5">
			<h2 className="m-0 text-lead font-strong">This fit rests on others: they were adjusted together</h2>
			<p className="m-0">
				With{' '}
				{others.map((other, index) => (
					<span key={other.fitId}>
						{index > 0 && ', '}
						<Link to={addressOf(other.setupId, other.fitId)} className="text-action underline underline-offset-3">
							fit {other.number} of set-up {other.setupName}
						</Link>
					</span>
				))}
				. They are adopted and checked together.{' '}
				{chiSquare &&
					`All together: ${chiSquare.statistic.toFixed(1)} on ${result.redundancy} degrees of freedom, 95 % lies between ${chiSquare.lower.toFixed(1)} and ${chiSquare.upper.toFixed(1)}${chiSquare.passes ? '.' : ': the test fails.'}`}
			</p>
			{ties.length > 0 && (
				<div ref={scrollStop} className="overflow-x-auto">
					<table className="w-full border-collapse">
						<caption className="sr-only">
							Targets that tie this set-up to others; where this set-up puts them less where all put them, mm
						</caption>
						<thead className="border-b border-ink text-small text-second">
							<tr>
								{['Tie', 'Seen by', 'East, mm', 'North, mm', 'Level, mm', 'Over its σ'].map((head, index) => (
									<th key={head} scope="col" className={`px-3 py-2 font-medium ${index < 2 ? 'text-left' : 'text-right'}`}>
										{head}
									</th>
								))}
							</tr>
						</thead>
						<tbody>
							{ties.map(({ mark, isKnown, setupIds, sightings }) => {
								const own = sightings.find((sighting) => sighting.setupId === setupId);
								const names = madeWith.fits.filter((other) => setupIds.includes(other.setupId)).map(({ setupName }) => setupName);
								return (
									<tr key={mark} className="border-b border-hair">
										<th scope="row" className="h-9 px-3 text-left font-strong">
											{mark}
											{isKnown && <span className="font-normal text-second"> control</span>}
										</th>
										<td className="px-3">{names.join(', ')}</td>
										{[0, 1, 2].map((axis) => (
											<td key={axis} className="px-3 text-right">
												{own ? signedNumber((own.residual[axis] ?? 0) * 1000, 1) : noFigure}
											</td>
										))}
										<td className={`px-3 text-right ${(own?.normalised ?? 0) > 3.29 ? 'font-strong' : ''}`}>
											{own?.normalised?.toFixed(1) ?? noFigure}
										</td>
									</tr>
								);
							})}
						</tbody>
					</table>
				</div>
			)}
		</section>
	);
}

/** Adopts all fits that were made together; gone once they are. */
export function AdoptTogether({ siteId, fit, mayAdopt }: { siteId: string; fit: FitSummary; mayAdopt: boolean }) {
	const [isAsked, setIsAsked] = useState(false);
	const queries = useQueryClient();
	const adopt = useMutation(api.fit.adopt.mutationOptions());
	if (fit.madeWith === null || fit.state !== 'made') return null;
	const names = fit.madeWith.fits.map(({ number, setupName }) => `fit ${number} of ${setupName}`).join(', ');
	const say = async (reason: string, surveyorInCharge: SurveyorInCharge) => {
		await adopt.mutateAsync({ siteId, fitId: fit.fitId, reason, surveyorInCharge });
		setIsAsked(false);
		await Promise.all([api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
	};
	return (
		<>
			<Button
				weight={mayAdopt ? 'act' : 'quiet'}
				whyNot={mayAdopt ? null : 'A site engineer adopts fits.'}
				isBusy={adopt.isPending}
				onClick={() => setIsAsked(true)}
			>
				Adopt these {fit.madeWith.fits.length} fits
			</Button>
			{isAsked && (
				<StandDialog
					title={`Adopt ${fit.madeWith.fits.length} fits together?`}
					act={`Adopt these ${fit.madeWith.fits.length} fits`}
					label="Why they may be used"
					hint="Kept with each fit and printed in its report."
					usual={['Ties and held-back marks agree', 'Misfit is within the σ of the instrument']}
					inCharge={fit.surveyorInCharge}
					onClose={() => setIsAsked(false)}
					onSay={say}
				>
					<p className="mt-0">{`${names}. One rests on the sightings of the others, so all are adopted or none.`}</p>
					{adopt.error && <p role="alert">{refusalOf(adopt.error).message}</p>}
				</StandDialog>
			)}
		</>
	);
}
