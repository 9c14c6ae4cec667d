import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import type { FitSummary } from '#shared/fit/contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { StandDialog } from './fit-dialogs.tsx';
import { kindWords } from './fit-words.ts';

interface CheckFitProps {
	siteId: string;
	/** An adopted fit. */
	fit: FitSummary;
	userId: string;
	/** Whether this person may adopt and check fits on the site. */
	mayAdopt: boolean;
}

/** The second person's press. It stays for whoever cannot press it, and says why; gone once the fit is checked. */
export function CheckFit({ siteId, fit, userId, mayAdopt }: CheckFitProps) {
	const [isAsked, setIsAsked] = useState(false);
	const queries = useQueryClient();
	const confirm = useMutation(api.fit.confirm.mutationOptions());
	if (fit.state !== 'adopted' || fit.checkedBy !== null) return null;
	const whyNot = !mayAdopt
		? 'A site engineer checks fits.'
		: fit.adoptedById === userId
			? 'You adopted this fit. Another site engineer checks it.'
			: null;
	return (
		<>
			<Button weight={whyNot === null ? 'act' : 'quiet'} whyNot={whyNot} isBusy={confirm.isPending} onClick={() => setIsAsked(true)}>
				I have checked it
			</Button>
			{isAsked && (
				<StandDialog
					title={`Fit ${fit.number} of set-up ${fit.setupName}: checked by you?`}
					act="I have checked it"
					label="What was checked"
					hint="Kept with the fit and printed in its report."
					usual={['Residuals, held-back marks and set-aside reasons seen', 'Computed again from the raw files, same figures']}
					inCharge={fit.surveyorInCharge}
					onClose={() => setIsAsked(false)}
					onSay={async (note, surveyorInCharge) => {
						await confirm.mutateAsync({ siteId, fitId: fit.fitId, note, surveyorInCharge });
						setIsAsked(false);
						await Promise.all([api.fit.key(), api.check.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
					}}
				>
					<p className="mt-0">
						{kindWords[fit.kind]}; {fit.pairCount} pairs in the fit, rms {(fit.rmsM * 1000).toFixed(1)} mm. Adopted by {fit.adoptedBy}: “
						{fit.adoptedReason}”. Deviations and pours rest on it.
					</p>
					{confirm.error && <p role="alert">{refusalOf(confirm.error).message}</p>}
				</StandDialog>
			)}
		</>
	);
}
