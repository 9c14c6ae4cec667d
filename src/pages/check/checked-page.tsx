import { useMutation } from '@tanstack/react-query';
import { useCallback, useMemo, useRef } from 'react';
import type { CheckDetail } from '#shared/check/contract.ts';
import { checkHeadline, headlineCounts } from '#shared/check/headline.ts';
import { CheckFindings } from '#src/features/check/check-findings.tsx';
import { DerivedCard } from '#src/features/check/derived-card.tsx';
import { DeviationCard } from '#src/features/check/deviation-card.tsx';
import { DeviationTable } from '#src/features/check/deviation-table.tsx';
import { scaledBy } from '#src/features/check/element-groups.ts';
import { VerdictChips } from '#src/features/check/verdict-chips.tsx';
import { countsOf } from '#src/features/check/verdict-filter.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { count } from '#src/lib/format.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { Button } from '#src/ui/button.tsx';
import { PressChip, Segmented } from '#src/ui/chip.tsx';
import { glyphKindOf } from '#src/ui/glyph-kind.ts';
import { Headline } from '#src/ui/headline.tsx';
import { useKey } from '#src/ui/keys.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { rodScaleMm } from '#src/ui/rod.tsx';
import { useIsBelow } from '#src/ui/screen-width.ts';
import type { ViewCommands } from '#src/ui/view-commands.ts';
import { WideRod, type WideRodTick } from '#src/ui/wide-rod.tsx';
import { CheckFilters } from './check-filters.tsx';
import { CheckStrip } from './check-strip.tsx';
import { CheckViewer } from './check-viewer.tsx';
import { NothingShown } from './nothing-shown.tsx';
import { PublishActs } from './publish-acts.tsx';
import { StaleNotice } from './stale-notice.tsx';
import { useCheckView } from './use-check-view.ts';
import { usePoursOf } from './use-pours-of.ts';

/** Side by side from a small laptop on; on an upright tablet the table above, picture and card below; on a phone one at a time. */
const sides =
	'grid gap-4 tablet:grid-cols-2 tablet:grid-rows-[28rem_24rem] cabin:h-[max(38rem,calc(100dvh-20.5rem))] cabin:grid-cols-[minmax(0,1fr)_416px] cabin:grid-rows-[minmax(0,57fr)_minmax(0,43fr)] desk:grid-cols-[minmax(0,1fr)_520px]';
const tableSide = 'h-[max(20rem,calc(100dvh-10.5rem))] min-h-0 min-w-0 tablet:col-span-2 tablet:h-auto cabin:col-span-1 cabin:row-span-2';
const viewerSide = 'h-[max(20rem,calc(100dvh-10.5rem))] min-h-0 min-w-0 tablet:h-auto';
const cardSide =
	'min-h-0 min-w-0 overflow-auto max-tablet:fixed max-tablet:inset-x-2 max-tablet:bottom-[5.25rem] max-tablet:z-10 max-tablet:max-h-[46dvh] max-tablet:rounded-corner max-tablet:shadow-lift';

const noneLeftOut: NonNullable<CheckDetail['leftOut']> = [];

type PhoneView = 'table' | 'plan' | 'model';

/** A check that has its figures: strip, headline, wide rod, chips, then table and picture side by side with the chosen deviation. */
export function CheckedPage({ check, siteId }: { check: CheckDetail; siteId: string }) {
	const view = useCheckView(check);
	const isPhone = useIsBelow('tablet');
	const [viewWord, setViewWord] = useAddressState('view');
	const phoneView: PhoneView = viewWord === 'plan' || viewWord === 'model' ? viewWord : 'table';
	const commands = useRef<ViewCommands | null>(null);
	const frameChosen = useRef<(checkpointId: string) => void>(() => {});

	const segment = useRef<HTMLDivElement>(null);
	/** On a phone one of the three fills the screen: it is brought there. */
	const showOnPhone = (next: PhoneView): void => {
		setViewWord(next === 'table' ? null : next);
		requestAnimationFrame(() => segment.current?.scrollIntoView?.({ block: 'start' }));
	};
	const putAway = useRef<() => void>(() => {});

	const scaleMm = useMemo(() => {
		const rows = scaledBy(check.deviations);
		return rodScaleMm(
			rows.map((row) => row.limitsMm),
			rows.map((row) => row.deviationMm),
		);
	}, [check.deviations]);
	const ticks = useMemo(
		() =>
			view.passing.flatMap((row): WideRodTick[] =>
				row.deviationMm === null || row.limitsMm === null
					? []
					: [
							{
								id: row.checkpointId,
								glyph: glyphKindOf(row),
								deviationMm: row.deviationMm,
								limitsMm: row.limitsMm,
								isPlan: row.characteristic === 'plan',
							},
						],
			),
		[view.passing],
	);
	const pours = usePoursOf(check, siteId);
	const headline = useMemo(() => {
		const pour = pours.find(({ pourId }) => pourId === view.pourId);
		const isOfPour = ({ elementId }: { elementId: string }): boolean =>
			view.elementById.get(elementId)?.pourIds.includes(view.pourId ?? '') === true;
		return pour === undefined
			? checkHeadline(headlineCounts(check.deviations, check.derived))
			: checkHeadline(headlineCounts(check.deviations.filter(isOfPour), check.derived.filter(isOfPour)), `Pour ${pour.number}`);
	}, [check.deviations, check.derived, pours, view.pourId, view.elementById]);
	const summary = useMemo(() => {
		const counts = countsOf(view.passing);
		return `Every deviation against its own limits: ${count(counts.within)} within, ${count(counts.proud + counts.shy + counts.plan)} outside, ${count(counts.close)} too close to call`;
	}, [view.passing]);

	useKey('f', 'Frame what is chosen', () => view.chosenId !== null && frameChosen.current(view.chosenId));
	useKey('escape', 'Choose nothing', view.clear);

	const csv = useMutation({
		mutationFn: () => client.check.csv({ siteId, checkId: check.checkId }),
		onSuccess: (blob) => saveBlob(blob, `check-${check.number}.csv`),
	});
	const setupNames = useMemo(() => new Map(check.fits.map((fit) => [fit.setupId, fit.setupName])), [check.fits]);
	const setupNameOf = useCallback((setupId: string) => setupNames.get(setupId) ?? null, [setupNames]);
	const open = useCallback(
		(checkpointId: string) => {
			view.choose(checkpointId);
			frameChosen.current(checkpointId);
		},
		[view.choose],
	);

	const isEmpty = check.deviations.every((row) => row.verdict === 'not-measured' || row.verdict === 'no-tolerance');
	const hasFindings = check.findings.length > 0 || check.unmatchedPoints.length > 0 || check.leftOut !== undefined;
	const filters = <CheckFilters check={check} pours={pours} view={view} />;
	const isTableShown = !isPhone || phoneView === 'table';
	const viewer = (
		<CheckViewer
			check={check}
			siteId={siteId}
			view={view}
			mode={isPhone ? (phoneView === 'table' ? 'away' : phoneView) : viewWord === 'plan' ? 'plan' : 'model'}
			{...(!isPhone && { onMode: (mode: 'plan' | 'model') => setViewWord(mode === 'model' ? null : mode) })}
			commands={commands}
			frameChosen={frameChosen}
			putAwayChosen={putAway}
		/>
	);
	const acts = (
		<span className="flex shrink-0 flex-wrap justify-end gap-1.5">
			{isPhone && phoneView === 'table' ? (
				<PressChip onPress={() => showOnPhone('plan')} title="Show it on the plan">
					On plan
				</PressChip>
			) : (
				<>
					<PressChip onPress={() => frameChosen.current(view.chosenId ?? '')} title="Fill the view with what is chosen (F)">
						Frame
					</PressChip>
					<PressChip onPress={() => putAway.current()} title="Take this element out of the view, until Whole">
						Put away
					</PressChip>
				</>
			)}
			{isPhone && <PressChip onPress={view.clear}>Close</PressChip>}
		</span>
	);
	const card = view.chosen ? (
		<DeviationCard
			deviation={view.chosen}
			element={view.chosenElement}
			stage={check.stage}
			isFolded={isPhone}
			setupName={view.chosen.setupId === null ? null : setupNameOf(view.chosen.setupId)}
			acts={acts}
		/>
	) : (
		view.chosenDerived && (
			<DerivedCard row={view.chosenDerived} element={view.chosenElement} deviations={check.deviations} onChoose={view.choose} acts={acts} />
		)
	);
	return (
		<>
			<CheckStrip check={check} />
			<Headline
				acts={
					<>
						<Button onClick={() => csv.mutate()} isBusy={csv.isPending}>
							Download CSV
						</Button>
						<PublishActs check={check} siteId={siteId} />
					</>
				}
			>
				{headline}
			</Headline>
			{csv.error && (
				<Notice kind="wrong" title="The CSV was not downloaded.">
					{refusalOf(csv.error).message}
				</Notice>
			)}
			<StaleNotice check={check} siteId={siteId} />
			<WideRod ticks={ticks} summary={summary} chosenId={view.chosenId} onChoose={view.choose} />
			{hasFindings && (
				<div className="mt-2 flex items-start gap-2 max-cabin:flex-wrap">
					<div className="min-w-0 flex-1 basis-80">
						<CheckFindings
							findings={check.findings}
							unmatchedPoints={check.unmatchedPoints}
							leftOut={check.leftOut ?? noneLeftOut}
							setupNameOf={setupNameOf}
						/>
					</div>
					{!isPhone && filters}
				</div>
			)}
			<div className="my-2 flex flex-wrap items-center gap-2 max-tablet:-mx-4 max-tablet:flex-nowrap max-tablet:overflow-x-auto max-tablet:px-4 max-tablet:py-1 max-tablet:[&>*]:shrink-0">
				<VerdictChips deviations={view.passing} shown={view.verdicts} onChange={view.setVerdicts} />
				{(isPhone || !hasFindings) && filters}
			</div>
			{isPhone && (
				<div ref={segment} className="mb-2 scroll-mt-2">
					<Segmented
						legend="Show as"
						value={phoneView}
						onChange={showOnPhone}
						options={[
							{ value: 'table', label: 'Table' },
							{ value: 'plan', label: 'On plan' },
							{ value: 'model', label: 'On model' },
						]}
					/>
				</div>
			)}
			<div className={sides}>
				<div className={isTableShown ? tableSide : 'hidden'}>
					{view.shown.length === 0 ? (
						<NothingShown view={view} />
					) : (
						<DeviationTable
							groups={view.shown}
							chosenId={view.chosenId}
							onChoose={view.choose}
							onOpen={open}
							scaleMm={scaleMm}
							isNarrow={isPhone}
						/>
					)}
				</div>
				<div className={isPhone && phoneView === 'table' ? 'hidden' : viewerSide}>{viewer}</div>
				{card ? (
					<div className={cardSide}>{card}</div>
				) : (
					!isPhone && (
						<p className="m-0 px-1 text-second">
							{isEmpty
								? 'No point of the survey met a checkpoint of this revision. The findings above name the likely reason: names, reach or the fit.'
								: 'Choose a row, a tick or a glyph: here stands what is known of it.'}
						</p>
					)
				)}
			</div>
		</>
	);
}
