import { useMutation, useQueryClient } from '@tanstack/react-query';
import { type ReactNode, useCallback, useDeferredValue, useMemo, useState } from 'react';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitDetail, FitSummary, PairsOfSetup, SurveyorInCharge } from '#shared/fit/contract.ts';
import type { FitKind } from '#shared/fit/fit-schema.ts';
import { curedPairs, shelvedInput, takesParts } from '#shared/fit/shelved-input.ts';
import type { SetupSummary } from '#shared/survey/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import type { Cure } from './cures.ts';
import { FindingCures } from './finding-cures.tsx';
import { StandDialog } from './fit-dialogs.tsx';
import { FitFigures } from './fit-figures.tsx';
import { FitPlan } from './fit-plan.tsx';
import { fitHeadline, kindsFor, kindWords, refusalTitle } from './fit-words.ts';
import { HoldBackProposal } from './hold-back-proposal.tsx';
import { KindAndScale } from './kind-and-scale.tsx';
import { Leftovers } from './leftovers.tsx';
import { pairFigures } from './pair-figures.ts';
import { PairTable, shelfWords } from './pair-table.tsx';
import { ReasonDialog } from './reason-dialog.tsx';
import { RelabelDialog } from './relabel-dialog.tsx';
import { SetupFindings } from './setup-findings.tsx';
import { type PairPlace, useShelves } from './shelves-state.ts';
import type { PlanExtent } from './uncertainty-field.ts';
import { UnnamedProposal } from './unnamed-proposal.tsx';
import { useFitSearch } from './use-fit-search.ts';
import { useRelabelledPairs } from './use-relabelled-pairs.ts';

interface FitWorkbenchProps {
	siteId: string;
	setup: SetupSummary;
	pairs: PairsOfSetup;
	/** What the shelves start from: the newest kept fit on the same control, where there is one. */
	start: FitDetail | null;
	adopted: FitSummary | null;
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	outline: PlanExtent | null;
	mayAdopt: boolean;
	/** Further acts of the page, before its own. */
	acts?: ReactNode;
}

type Asked = { what: 'adopt' } | { what: 'relabel' } | { what: 'place'; name: string; place: PairPlace };

/** Pairs on three shelves with the figures at once: the engine runs here, and the server computes again what is kept. */
export function FitWorkbench({ siteId, setup, pairs: named, start, adopted, grid, outline, mayAdopt, acts }: FitWorkbenchProps) {
	const kinds = kindsFor(setup);
	const [kind, setKind] = useState<FitKind>(start && kinds.includes(start.kind) ? start.kind : kinds[0]);
	const [knownScale, setKnownScale] = useState<number | null>(start?.knownScale ?? null);
	const choices = useShelves({ shelves: start?.shelves ?? [], relabellings: start?.relabellings ?? [] });
	const { shelves, relabellings, put, exchange, relabel } = choices;
	const [chosenName, choose] = useAddressState('at');
	const [asked, setAsked] = useState<Asked | null>(null);
	const pairs = useRelabelledPairs(siteId, named, relabellings);

	const input = useMemo(() => shelvedInput(pairs.pairs, kind, knownScale, shelves), [pairs.pairs, kind, knownScale, shelves]);
	// Figures at once; what is behind them is searched for in a thread.
	const outcome = useMemo(() => (input.pairs.length === 0 ? null : computeFit(input, { findings: false })), [input]);
	const fit = outcome?.ok ? outcome.result : null;
	const search = useMemo(() => (fit === null ? null : { task: 'findings' as const, input }), [fit, input]);
	const { answer, isSearching } = useFitSearch<'findings'>(search);
	const findings = answer?.findings ?? [];
	const used = useMemo(() => curedPairs(pairs.pairs, kind, shelves), [pairs.pairs, kind, shelves]);
	const shown = useMemo(() => used.map(({ pair }) => pair), [used]);
	const figures = useMemo(() => pairFigures(shown, fit), [shown, fit]);
	// The picture may lag behind the figures by a frame.
	const drawn = useDeferredValue(useMemo(() => ({ pairs: shown, fit }), [shown, fit]));

	const queries = useQueryClient();
	const make = useMutation(api.fit.make.mutationOptions());
	const adopt = useMutation(api.fit.adopt.mutationOptions());
	const keepAndAdopt = async (reason: string, surveyorInCharge: SurveyorInCharge) => {
		const made = await make.mutateAsync({
			siteId,
			setupId: setup.setupId,
			controlSetId: pairs.controlSetId,
			kind,
			knownScale,
			// A mark whose target was given another label has no pair any more.
			shelves: shelves.filter(({ name }) => pairs.pairs.some((pair) => pair.name === name)),
			...(relabellings.length > 0 ? { relabellings: [...relabellings] } : {}),
		});
		await adopt.mutateAsync({ siteId, fitId: made.fitId, reason, surveyorInCharge });
		setAsked(null);
		await Promise.all([api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
	};
	const move = useCallback(
		(name: string, place: PairPlace) => {
			// Out of the fit, or into it in part, needs a reason, because it will be asked later.
			if (place.shelf === 'set-aside' || place.use !== 'all') setAsked({ what: 'place', name, place });
			else put([name], place, null);
		},
		[put],
	);
	const cure = (taken: Cure, reason: string) => {
		if (taken.act === 'exchange') exchange(taken.names, reason);
		else put(taken.names, taken.place, reason);
	};
	const isAsAdopted =
		start !== null && start.fitId === adopted?.fitId && !choices.hasChanged && kind === start.kind && knownScale === start.knownScale;

	return (
		<>
			<Headline
				title={`Fit of set-up ${setup.name}`}
				acts={
					<>
						{choices.takeBack && <Button onClick={choices.takeBack}>Take back</Button>}
						{isAsAdopted ? acts : null}
						{!isAsAdopted && (
							<Button
								weight="act"
								whyNot={whyNotAdopt(mayAdopt, fit !== null)}
								isBusy={make.isPending || adopt.isPending}
								onClick={() => setAsked({ what: 'adopt' })}
							>
								Adopt this fit
							</Button>
						)}
					</>
				}
			>
				{fitHeadline(setup.name, outcome, findings, adopted, choices.hasChanged)}
			</Headline>
			<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
				<div className="flex min-w-0 flex-col gap-3.5">
					<UnnamedProposal pairs={pairs} levelling={setup.levelling} onTake={mayAdopt ? relabel : null} />
					{outcome && !outcome.ok && (
						<Notice kind="wrong" title={refusalTitle(outcome.refusal)}>
							{outcome.refusal.message}
						</Notice>
					)}
					<SetupFindings findings={pairs.findings ?? []} voids={mayAdopt ? { siteId, setup } : null} />
					{fit && (
						<FindingCures
							findings={findings}
							pairs={pairs.pairs}
							kind={kind}
							knownScale={knownScale}
							shelves={shelves}
							fit={fit}
							onCure={mayAdopt ? cure : null}
							isSearching={isSearching}
						/>
					)}
					{fit && answer && !isSearching && (
						<HoldBackProposal
							input={input}
							fit={fit}
							findings={findings}
							outline={outline}
							onHold={mayAdopt ? (name, reason) => put([name], { shelf: 'held-back', use: 'all' }, reason) : null}
						/>
					)}
					<PairTable
						pairs={pairs.pairs}
						figures={figures}
						shelvingOf={choices.shelvingOf}
						mayPart={takesParts(kind)}
						chosenName={chosenName}
						onChoose={choose}
						onMove={mayAdopt ? move : null}
					/>
					<Leftovers
						pairs={pairs}
						leftOut={used.flatMap(({ pair, isLeftOut }) => (isLeftOut ? [pair.name] : []))}
						onRelabel={mayAdopt ? { ask: () => setAsked({ what: 'relabel' }), put: relabel } : null}
					/>
					<KindAndScale kinds={kinds} kind={kind} onKind={setKind} knownScale={knownScale} onKnownScale={setKnownScale} />
				</div>
				<div className="flex min-w-0 flex-col gap-3.5">
					<div className="sheet overflow-hidden">
						<FitPlan pairs={drawn.pairs} fit={drawn.fit} grid={grid} outline={outline} chosenName={chosenName} onChoose={choose} />
					</div>
					{fit && <FitFigures fit={fit} />}
				</div>
			</div>
			{asked?.what === 'adopt' && fit && (
				<StandDialog
					title={`Adopt the fit of set-up ${setup.name}?`}
					label="Reason"
					hint="Kept with the fit and read by whoever asks later why it was trusted."
					act="Adopt this fit"
					usual={['Residuals agree with the instrument’s σ', 'Independent check agrees']}
					inCharge={start?.surveyorInCharge ?? null}
					onSay={keepAndAdopt}
					onClose={() => setAsked(null)}
				>
					<p className="mt-0">
						{kindWords[kind]}; {fit.pairs.filter((pair) => !pair.heldBack).length} pairs in the fit, rms {(fit.rms * 1000).toFixed(1)} mm.{' '}
						{fit.pairs.some((pair) => pair.heldBack) ? '' : <b>No independent check: no pair is held back. </b>}
						{fit.chiSquare && fit.chiSquare.statistic > fit.chiSquare.upper && (
							<b>It misfits by more than its σ allow: say why it is used all the same. </b>
						)}
						It is never edited afterwards; a later one supersedes it. Deviations of this set-up rest on it.
					</p>
					{(make.error ?? adopt.error) && <p role="alert">{refusalOf(make.error ?? adopt.error).message}</p>}
				</StandDialog>
			)}
			{asked?.what === 'relabel' && (
				<RelabelDialog
					pairs={pairs}
					relabellings={relabellings}
					onSay={(next) => {
						relabel(next);
						setAsked(null);
					}}
					onClose={() => setAsked(null)}
				/>
			)}
			{asked?.what === 'place' && (
				<ReasonDialog
					title={`${placeWords(asked.place)}: ${asked.name}`}
					hint="Kept with the fit and printed with it."
					act={asked.place.use === 'all' ? `Set ${asked.name} aside` : `Use ${asked.name} in ${asked.place.use} only`}
					usual={
						asked.place.use === 'plan'
							? ['Target height not certain', 'Level not observed']
							: asked.place.use === 'level'
								? ['Plan disturbed', 'Benchmark only']
								: ['Mark disturbed', 'Wrong label', 'Sighted badly']
					}
					longest={300}
					onSay={async (reason) => {
						put([asked.name], asked.place, reason);
						setAsked(null);
					}}
					onClose={() => setAsked(null)}
				/>
			)}
		</>
	);
}

function placeWords({ shelf, use }: PairPlace): string {
	return use === 'all' ? shelfWords[shelf] : `In ${use} only`;
}

function whyNotAdopt(mayAdopt: boolean, hasFit: boolean): string | null {
	if (!mayAdopt) return 'A site engineer adopts fits.';
	return hasFit ? null : 'There is no fit to adopt.';
}
