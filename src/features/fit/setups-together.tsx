import { useMutation, useQueryClient, useSuspenseQueries } from '@tanstack/react-query';
import { useNavigate } from 'react-router-dom';
import type { NetworkOutlook } from '#shared/fit/network-schema.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { scrollStop } from '#src/ui/scroll-stop.ts';

interface SetupsTogetherProps {
	siteId: string;
	surveyId: string;
	controlSetId: string;
	mayFit: boolean;
	/** Where a fit of a set-up is looked at. */
	addressOf: (setupId: string, fitId: string) => string;
}

/** Which set-ups of a survey are tied through which targets, and the press that adjusts them together. Nothing where there is one set-up. */
export function SetupsTogether({ siteId, surveyId, controlSetId, mayFit, addressOf }: SetupsTogetherProps) {
	const navigate = useNavigate();
	const queries = useQueryClient();
	const [{ data: outlook }, { data: fits }] = useSuspenseQueries({
		queries: [api.fit.ties.queryOptions({ input: { siteId, surveyId, controlSetId } }), api.fit.list.queryOptions({ input: { siteId } })],
	});
	const make = useMutation({
		mutationFn: async () => {
			// What lies on the shelves in each set-up's newest fit on this control stays there.
			const setups = await Promise.all(
				outlook.setups.map(async ({ setupId }) => {
					const newest = fits.find((fit) => fit.setupId === setupId && fit.controlSetId === controlSetId);
					if (newest === undefined) return { setupId, shelves: [] };
					const { shelves, relabellings } = await client.fit.get({ siteId, fitId: newest.fitId });
					return { setupId, shelves, relabellings };
				}),
			);
			return client.fit.makeTogether({ siteId, surveyId, controlSetId, setups });
		},
		onSuccess: async ({ fits: made }) => {
			await queries.invalidateQueries({ queryKey: api.fit.key() });
			if (made[0]) navigate(addressOf(made[0].setupId, made[0].fitId));
		},
	});
	if (outlook.setups.length < 2) return null;
	return (
		<section aria-label="Set-ups together" className="sheet flex flex-col gap-2.5 px-4.5 py-3.5">
			<div className="flex flex-wrap items-start gap-x-6 gap-y-2">
				<div className="min-w-0 flex-1 basis-72">
					<h2 className="m-0 text-lead font-strong">{tieHeadline(outlook)}</h2>
					<p className="m-0 text-second">{outlook.setups.map(setupWords).join(' · ')}</p>
				</div>
				<Button whyNot={mayFit ? outlook.whyNot : 'A site engineer makes fits.'} isBusy={make.isPending} onClick={() => make.mutate()}>
					Adjust set-ups together
				</Button>
			</div>
			{outlook.ties.length > 0 && <TieTable outlook={outlook} />}
			{make.error && (
				<p role="alert" className="m-0 font-medium">
					{refusalOf(make.error).message}
				</p>
			)}
		</section>
	);
}

function tieHeadline({ setups, ties }: NetworkOutlook): string {
	if (ties.length === 0) return 'No target ties these set-ups to one another';
	const leaning = setups.filter(({ standsAlone }) => !standsAlone).map(({ name }) => name);
	const tied = `${counted(ties.length, 'target')} ${ties.length === 1 ? 'ties' : 'tie'} these set-ups`;
	return leaning.length === 0 ? tied : `${tied}: ${leaning.join(', ')} ${leaning.length === 1 ? 'rests' : 'rest'} on the others`;
}

function setupWords({ name, knownCount, tieCount, standsAlone }: NetworkOutlook['setups'][number]): string {
	return `${name}: ${counted(knownCount, 'control point')}, ${counted(tieCount, 'other tie')}${standsAlone ? '' : ', too little to stand alone'}`;
}

function TieTable({ outlook: { setups, ties } }: { outlook: NetworkOutlook }) {
	return (
		<div ref={scrollStop} className="overflow-x-auto">
			<table className="w-full border-collapse">
				<thead className="border-b border-ink text-small text-second">
					<tr>
						{['Target', 'Known', ...setups.map(({ name }) => `From ${name}`)].map((head) => (
							<th key={head} scope="col" className="px-3 py-2 text-left font-medium first:pl-0">
								{head}
							</th>
						))}
					</tr>
				</thead>
				<tbody>
					{ties.map(({ mark, isKnown, setupIds }) => (
						<tr key={mark} className="border-b border-hair">
							<th scope="row" className="h-9 pr-3 text-left font-strong">
								{mark}
							</th>
							<td className="px-3">{isKnown ? 'control' : 'ties only'}</td>
							{setups.map(({ setupId }) => (
								<td key={setupId} className="px-3">
									{setupIds.includes(setupId) ? 'seen' : ''}
								</td>
							))}
						</tr>
					))}
				</tbody>
			</table>
		</div>
	);
}
