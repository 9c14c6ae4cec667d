import { useMutation, useQuery } from '@tanstack/react-query';
import { useNavigate } from 'react-router-dom';
import type { CheckDetail } from '#shared/check/contract.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { useMay } from '#src/lib/session.ts';
import { Button } from '#src/ui/button.tsx';

/** Why these figures no longer stand on the newest, and the press that makes new ones: "Rev 5 is newer; these figures stand on rev 4." */
export function StaleNotice({ check, siteId }: { check: CheckDetail; siteId: string }) {
	const { revision, fits, sheet } = check;
	const isStale = !revision.isNewest || !sheet.isNewest || fits.some((fit) => !fit.isNewest);
	const mayCheck = useMay('check.write');
	const navigate = useNavigate();
	const models = useQuery({ ...api.model.list.queryOptions({ input: { siteId } }), enabled: isStale });
	const sheets = useQuery({ ...api.tolerance.list.queryOptions({ input: { siteId } }), enabled: isStale });
	const run = useMutation(api.check.run.mutationOptions({ onSuccess: ({ checkId }) => navigate(`/sites/${siteId}/checks/${checkId}`) }));
	if (!isStale) return null;
	const revisions = models.data?.find((model) => model.name === revision.modelName)?.revisions ?? [];
	const newest = revisions.find((each) => each.state === 'ready');
	const issued = sheets.data?.find((each) => each.state === 'issued');
	const reasons = [
		...(revision.isNewest
			? []
			: [`${newest ? `Rev ${newest.number} is newer` : 'A newer revision is there'}; these figures stand on rev ${revision.number}.`]),
		...(fits.every((fit) => fit.isNewest)
			? []
			: [
					`A newer fit of ${fits.flatMap((fit) => (fit.isNewest ? [] : [`set-up ${fit.setupName}`])).join(' and ')} is there; these figures stand on the older one.`,
				]),
		...(sheet.isNewest ? [] : [`A newer tolerance sheet is issued; these figures were held against ${sheet.name} rev ${sheet.revision}.`]),
	];
	const again = (): void => {
		if (newest === undefined || issued === undefined) return;
		run.mutate({ siteId, revisionId: newest.revisionId, surveyId: check.survey.surveyId, sheetId: issued.sheetId });
	};
	return (
		<section
			role="status"
			className="sheet mb-2 flex flex-wrap items-center gap-x-5 gap-y-2 border-l-[7px] border-l-ink px-4 py-2 [border-left-style:dashed]"
		>
			<p className="m-0 min-w-0 flex-1 basis-72">
				<b>{reasons.join(' ')}</b>
				{run.error !== null && <span className="block">{refusalOf(run.error).message} Nothing was changed.</span>}
			</p>
			{mayCheck && (
				<Button
					weight="act"
					onClick={again}
					isBusy={run.isPending}
					whyNot={newest === undefined || issued === undefined ? 'Looking for the newest revision and sheet …' : null}
				>
					Check again
				</Button>
			)}
		</section>
	);
}
