import { useSuspenseQueries, useSuspenseQuery } from '@tanstack/react-query';
import { type ReactNode, useMemo } from 'react';
import { Link, useParams } from 'react-router-dom';
import type { FitDetail, FitSummary } from '#shared/fit/contract.ts';
import { mayWith } from '#shared/permissions.ts';
import type { SetupSummary } from '#shared/survey/contract.ts';
import { CheckFit } from '#src/features/fit/check-fit.tsx';
import { FitHistory } from '#src/features/fit/fit-history.tsx';
import { kindWords, standingWords } from '#src/features/fit/fit-words.ts';
import { FitWorkbench } from '#src/features/fit/fit-workbench.tsx';
import { KeptFit } from '#src/features/fit/kept-fit.tsx';
import { AdoptTogether } from '#src/features/fit/network-fit.tsx';
import { ReportButton } from '#src/features/fit/report-button.tsx';
import { planExtentOf } from '#src/features/fit/uncertainty-field.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { ButtonLink } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** The fit of one set-up: its pairs, what they say, and the fits that were kept. */
export default function FitPage() {
	const { siteId = '', surveyId = '', setupId = '' } = useParams();
	const [controlWish] = useAddressState('control');
	const [wishedFitId] = useAddressState('fit', 'push');
	const [{ data: site }, { data: survey }, { data: controlSets }, { data: fits }, { data: models }, { data: me }] = useSuspenseQueries({
		queries: [
			api.site.get.queryOptions({ input: { siteId } }),
			api.survey.get.queryOptions({ input: { siteId, surveyId } }),
			api.control.list.queryOptions({ input: { siteId } }),
			api.fit.list.queryOptions({ input: { siteId, setupId } }),
			api.model.list.queryOptions({ input: { siteId } }),
			api.account.me.queryOptions(),
		],
	});
	const setup = survey.setups.find((candidate) => candidate.setupId === setupId);
	const controlSet = controlSets.find((set) => set.controlSetId === controlWish) ?? controlSets[0];
	const revision = models.flatMap((model) => model.revisions).find((candidate) => candidate.state === 'ready');
	const adopted = fits.find((fit) => fit.state === 'adopted') ?? null;
	// A fit that was made together with others has nothing to be moved here, so it is shown as it was kept unless the pairs are asked for.
	const newest = fits.find((fit) => fit.controlSetId === controlSet?.controlSetId);
	const ownPairs = 'pairs';
	const shownFitId = wishedFitId === ownPairs ? null : (wishedFitId ?? (newest?.madeWith ? newest.fitId : null));
	const strip = setup && (
		<Strip
			items={[
				<Link key="survey" to={`/sites/${siteId}/surveys/${surveyId}`} className="underline underline-offset-3">
					survey {survey.number}, set-up {setup.name}
				</Link>,
				setup.levelling === 'levelled' ? 'levelled' : 'free',
				setup.bringsScale ? 'brings its own scale' : 'scale not known',
				controlSet && `control ${controlSet.number}${controlSet === controlSets[0] ? ', newest' : ''}`,
				`common part ${setup.commonMm} mm`,
				adopted && <b key="adopted">{standingWords(adopted)}</b>,
			]}
		/>
	);
	if (!setup) return <Notice kind="wrong" title="This survey has no such set-up" />;
	if (!controlSet)
		return (
			<>
				{strip}
				<Headline>{`Set-up ${setup.name} has nothing to be tied to: there is no control yet`}</Headline>
				<Notice
					kind="empty"
					title="Control first"
					act={
						<ButtonLink to={`/sites/${siteId}/control`} weight="act">
							Bring the control
						</ButtonLink>
					}
				>
					A fit needs points that are known in the design and were sighted from this set-up.
				</Notice>
			</>
		);
	const about = { siteId, setup, revisionId: revision?.revisionId ?? null };
	const mayAdopt = mayWith(site.roles, 'fit.adopt');
	const actsOn = (fit: FitSummary) => (
		<>
			<ReportButton siteId={siteId} fit={fit} />
			<AdoptTogether siteId={siteId} fit={fit} mayAdopt={mayAdopt} />
			{me && <CheckFit siteId={siteId} fit={fit} userId={me.userId} mayAdopt={mayAdopt} />}
		</>
	);
	return (
		<>
			{strip}
			{shownFitId && fits.some((fit) => fit.fitId === shownFitId) ? (
				<Kept
					{...about}
					fitId={shownFitId}
					timeZone={site.timeZone}
					back={`?fit=${ownPairs}`}
					addressOf={(id, fitId) => `/sites/${siteId}/surveys/${surveyId}/setups/${id}?fit=${fitId}`}
					actsOn={actsOn}
				/>
			) : (
				<Workbench
					// What was moved belongs to these pairs: other control or a newly adopted fit starts anew.
					key={`${setupId} ${controlSet.controlSetId} ${adopted?.fitId ?? ''}`}
					{...about}
					controlSetId={controlSet.controlSetId}
					startFitId={fits.find((fit) => fit.controlSetId === controlSet.controlSetId)?.fitId ?? null}
					mayAdopt={mayAdopt}
					adopted={adopted}
					actsOn={actsOn}
				/>
			)}
			<h2 className="mt-8 mb-3 text-h2 font-strong">Fits of this set-up</h2>
			<FitHistory fits={fits} timeZone={site.timeZone} addressOf={(fitId) => `?fit=${fitId}`} shownFitId={shownFitId} />
		</>
	);
}

interface AboutSetup {
	siteId: string;
	setup: SetupSummary;
	revisionId: string | null;
}

interface WorkbenchProps extends AboutSetup {
	controlSetId: string;
	startFitId: string | null;
	adopted: FitSummary | null;
	mayAdopt: boolean;
	/** What can be done with an adopted fit. */
	actsOn: (fit: FitSummary) => ReactNode;
}

function Workbench({ siteId, setup, revisionId, controlSetId, startFitId, adopted: newest, mayAdopt, actsOn }: WorkbenchProps) {
	const { data: pairs } = useSuspenseQuery(api.fit.pairs.queryOptions({ input: { siteId, setupId: setup.setupId, controlSetId } }));
	const start = useKeptFit(siteId, startFitId);
	const { grid, outline } = useModelOutline(siteId, revisionId);
	const adopted = start && start.fitId === newest?.fitId ? newest : null;
	return (
		<FitWorkbench
			siteId={siteId}
			setup={setup}
			pairs={pairs}
			start={start}
			adopted={adopted}
			grid={grid}
			outline={outline}
			mayAdopt={mayAdopt}
			acts={adopted && actsOn(adopted)}
		/>
	);
}

interface KeptProps extends AboutSetup {
	fitId: string;
	timeZone: string;
	back: string;
	addressOf: (setupId: string, fitId: string) => string;
	actsOn: (fit: FitSummary) => ReactNode;
}

function Kept({ siteId, setup, revisionId, fitId, timeZone, back, addressOf, actsOn }: KeptProps) {
	const { data: fit } = useSuspenseQuery(api.fit.get.queryOptions({ input: { siteId, fitId } }));
	const { grid, outline } = useModelOutline(siteId, revisionId);
	return (
		<>
			<Headline
				title={`Fit ${fit.number} of set-up ${setup.name}`}
				acts={
					<>
						<ButtonLink to={back}>Back to the pairs</ButtonLink>
						{actsOn(fit)}
					</>
				}
			>
				{`Fit ${fit.number} of set-up ${setup.name}, ${fit.state === 'made' ? 'not adopted' : fit.state}: ${kindWords[fit.kind]}`}
			</Headline>
			<KeptFit fit={fit} timeZone={timeZone} addressOf={addressOf} grid={grid} outline={outline} />
		</>
	);
}

/** A kept fit, or null where there is none: the query is only asked where there is an id. */
function useKeptFit(siteId: string, fitId: string | null): FitDetail | null {
	const results = useSuspenseQueries({ queries: optional(fitId).map((id) => api.fit.get.queryOptions({ input: { siteId, fitId: id } })) });
	return results[0]?.data ?? null;
}

/** The newest model's grid and its extent in plan; empty where there is no model yet. */
function useModelOutline(siteId: string, revisionId: string | null) {
	const ids = optional(revisionId);
	const details = useSuspenseQueries({ queries: ids.map((id) => api.model.revision.queryOptions({ input: { siteId, revisionId: id } })) });
	const elements = useSuspenseQueries({ queries: ids.map((id) => api.model.elements.queryOptions({ input: { siteId, revisionId: id } })) });
	const stored = elements[0]?.data;
	const outline = useMemo(() => (stored ? planExtentOf(stored) : null), [stored]);
	return { grid: details[0]?.data.reading.grid ?? [], outline };
}

/** One or none, so that a query is asked only where there is an id. */
function optional(id: string | null): string[] {
	return id === null ? [] : [id];
}
