import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useId, useMemo, useState } from 'react';
import { computeFit } from '#shared/fit/compute-fit.ts';
import type { FitDetail, FitSummary, PairsOfSetup, Shelf } from '#shared/fit/contract.ts';
import type { FitKind } from '#shared/fit/fit-schema.ts';
import { shelvedInput } from '#shared/fit/shelved-input.ts';
import type { SetupSummary } from '#shared/survey/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { Button } from '#src/ui/button.tsx';
import { describedBy, FieldFrame, numberOf } from '#src/ui/field.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { FindingCures } from './finding-cures.tsx';
import { FitFigures } from './fit-figures.tsx';
import { FitPlan } from './fit-plan.tsx';
import { fitHeadline, kindsFor, kindWords, refusalTitle } from './fit-words.ts';
import { pairFigures } from './pair-figures.ts';
import { PairTable, shelfWords } from './pair-table.tsx';
import { ReasonDialog } from './reason-dialog.tsx';
import { useShelves } from './shelves-state.ts';
import type { PlanExtent } from './uncertainty-field.ts';

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
}

/** Pairs on three shelves with the result at once: the engine runs here, and the server computes again what is kept. */
export function FitWorkbench({ siteId, setup, pairs, start, adopted, grid, outline, mayAdopt }: FitWorkbenchProps) {
	const kinds = kindsFor(setup);
	const [kind, setKind] = useState<FitKind>(start && kinds.includes(start.kind) ? start.kind : kinds[0]);
	const [knownScale, setKnownScale] = useState<number | null>(start?.knownScale ?? null);
	const shelves = useShelves(start?.shelves ?? []);
	const [chosenName, choose] = useAddressState('at');
	const [asked, setAsked] = useState<{ name: string; shelf: Shelf } | 'adopt' | null>(null);

	const outcome = useMemo(
		() => (pairs.pairs.length === 0 ? null : computeFit(shelvedInput(pairs.pairs, kind, knownScale, shelves.shelves))),
		[pairs.pairs, kind, knownScale, shelves.shelves],
	);
	const fit = outcome?.ok ? outcome.result : null;
	const figures = useMemo(() => pairFigures(pairs.pairs, fit), [pairs.pairs, fit]);

	const queries = useQueryClient();
	const make = useMutation(api.fit.make.mutationOptions());
	const adopt = useMutation(api.fit.adopt.mutationOptions());
	const keepAndAdopt = async (reason: string) => {
		const made = await make.mutateAsync({
			siteId,
			setupId: setup.setupId,
			controlSetId: pairs.controlSetId,
			kind,
			knownScale,
			shelves: [...shelves.shelves],
		});
		await adopt.mutateAsync({ siteId, fitId: made.fitId, reason });
		setAsked(null);
		await Promise.all([api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
	};
	const move = (name: string, shelf: Shelf) => {
		// Back into the fit needs no reason; out of it does, because it will be asked later.
		if (shelf === 'set-aside') setAsked({ name, shelf });
		else shelves.move([name], shelf, null);
	};
	const isAsAdopted =
		start !== null && start.fitId === adopted?.fitId && !shelves.hasChanged && kind === start.kind && knownScale === start.knownScale;
	const whyNot = whyNotAdopt(mayAdopt, fit !== null, isAsAdopted);

	return (
		<>
			<Headline
				title={`Fit of set-up ${setup.name}`}
				acts={
					<>
						{shelves.takeBack && <Button onClick={shelves.takeBack}>Take back</Button>}
						<Button weight="act" whyNot={whyNot} isBusy={make.isPending || adopt.isPending} onClick={() => setAsked('adopt')}>
							Adopt this fit
						</Button>
					</>
				}
			>
				{fitHeadline(setup.name, outcome, adopted, shelves.hasChanged)}
			</Headline>
			<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
				<div className="flex min-w-0 flex-col gap-3.5">
					<KindAndScale kinds={kinds} kind={kind} onKind={setKind} knownScale={knownScale} onKnownScale={setKnownScale} />
					{outcome && !outcome.ok && (
						<Notice kind="wrong" title={refusalTitle(outcome.refusal)}>
							{outcome.refusal.message}
						</Notice>
					)}
					{fit && (
						<FindingCures
							findings={fit.findings}
							pairs={pairs.pairs}
							kind={kind}
							knownScale={knownScale}
							shelves={shelves.shelves}
							fit={fit}
							onMove={mayAdopt ? shelves.move : null}
						/>
					)}
					<PairTable
						pairs={pairs.pairs}
						figures={figures}
						shelfOf={shelves.shelfOf}
						reasonOf={shelves.reasonOf}
						chosenName={chosenName}
						onChoose={choose}
						onMove={mayAdopt ? move : null}
					/>
					<Leftovers pairs={pairs} />
				</div>
				<div className="flex min-w-0 flex-col gap-3.5">
					<div className="sheet overflow-hidden">
						<FitPlan pairs={pairs.pairs} fit={fit} grid={grid} outline={outline} chosenName={chosenName} onChoose={choose} />
					</div>
					{fit && <FitFigures fit={fit} />}
				</div>
			</div>
			{asked === 'adopt' && fit && (
				<ReasonDialog
					title={`Adopt the fit of set-up ${setup.name}?`}
					hint="Kept with the fit and read by whoever asks later why it was trusted."
					act="Adopt this fit"
					usual={['Residuals agree with the instrument’s σ', 'Independent check agrees']}
					longest={500}
					onSay={keepAndAdopt}
					onClose={() => setAsked(null)}
				>
					<p className="mt-0">
						{kindWords[kind]}; {fit.pairs.filter((pair) => !pair.heldBack).length} pairs in the fit, rms {(fit.rms * 1000).toFixed(1)} mm.{' '}
						{fit.pairs.some((pair) => pair.heldBack) ? '' : <b>No independent check: no pair is held back. </b>}
						It is never edited afterwards; a later one supersedes it. Deviations of this set-up rest on it.
					</p>
					{(make.error ?? adopt.error) && <p role="alert">{refusalOf(make.error ?? adopt.error).message}</p>}
				</ReasonDialog>
			)}
			{asked !== null && asked !== 'adopt' && (
				<ReasonDialog
					title={`${shelfWords[asked.shelf]}: ${asked.name}`}
					hint="Kept with the fit and printed with it."
					act={`Set ${asked.name} aside`}
					usual={['Mark disturbed', 'Wrong label', 'Sighted badly']}
					longest={300}
					onSay={async (reason) => {
						shelves.move([asked.name], asked.shelf, reason);
						setAsked(null);
					}}
					onClose={() => setAsked(null)}
				/>
			)}
		</>
	);
}

function whyNotAdopt(mayAdopt: boolean, hasFit: boolean, isAsAdopted: boolean): string | null {
	if (!mayAdopt) return 'A site engineer adopts fits.';
	if (!hasFit) return 'There is no fit to adopt.';
	return isAsAdopted ? 'This is the adopted fit. Move a pair or choose another fit first.' : null;
}

interface KindAndScaleProps {
	kinds: readonly FitKind[];
	kind: FitKind;
	onKind: (kind: FitKind) => void;
	knownScale: number | null;
	onKnownScale: (scale: number | null) => void;
}

function KindAndScale({ kinds, kind, onKind, knownScale, onKnownScale }: KindAndScaleProps) {
	const kindId = useId();
	const scaleId = useId();
	const [typed, setTyped] = useState(knownScale === null ? '' : String(knownScale));
	const number = numberOf(typed, true);
	const isWrong = number !== null && !(number >= 0.5 && number <= 2);
	const inputClass =
		'min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body text-ink aria-invalid:border-2 aria-invalid:border-ink pointer-coarse:min-h-12';
	return (
		<div className="grid gap-3.5 tablet:grid-cols-2">
			<FieldFrame id={kindId} label="Fit">
				<select id={kindId} value={kind} onChange={(event) => onKind(event.currentTarget.value as FitKind)} className={inputClass}>
					{kinds.map((option) => (
						<option key={option} value={option}>
							{kindWords[option]}
						</option>
					))}
				</select>
			</FieldFrame>
			{!kind.endsWith('-scaled') && kind !== 'height' && (
				<FieldFrame
					id={scaleId}
					label="Known grid/ground factor, plan only"
					error={isWrong ? 'A factor lies near 1: between 0.5 and 2.' : undefined}
				>
					<input
						id={scaleId}
						inputMode="decimal"
						autoComplete="off"
						placeholder="1"
						value={typed}
						aria-invalid={isWrong || undefined}
						aria-describedby={describedBy(scaleId, false, isWrong)}
						onChange={(event) => {
							setTyped(event.currentTarget.value);
							const next = numberOf(event.currentTarget.value, true);
							if (next === null || (next >= 0.5 && next <= 2)) onKnownScale(next);
						}}
						className={`${inputClass} text-right`}
					/>
				</FieldFrame>
			)}
		</div>
	);
}

/** What has no partner, and why σ are not used. */
function Leftovers({ pairs }: { pairs: PairsOfSetup }) {
	const lines = [
		pairs.targetsWithoutControl.length > 0 && `Sighted as a target, but not in the control: ${pairs.targetsWithoutControl.join(', ')}.`,
		pairs.controlWithoutTarget.length > 0 && `In the control, not sighted from here: ${pairs.controlWithoutTarget.join(', ')}.`,
		pairs.sigmaNote,
	].filter((line) => line !== false && line !== null);
	if (lines.length === 0) return null;
	return (
		<ul className="m-0 flex list-none flex-col gap-1 p-0 text-second">
			{lines.map((line) => (
				<li key={line}>{line}</li>
			))}
		</ul>
	);
}
