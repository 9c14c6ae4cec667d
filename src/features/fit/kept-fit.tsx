import { useMemo } from 'react';
import type { FitDetail } from '#shared/fit/contract.ts';
import { curedPairs, takesParts } from '#shared/fit/shelved-input.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { isoMoment } from '#src/lib/format.ts';
import { FindingCures } from './finding-cures.tsx';
import { FitFigures } from './fit-figures.tsx';
import { FitPlan } from './fit-plan.tsx';
import { Leftovers } from './leftovers.tsx';
import { NetworkFit } from './network-fit.tsx';
import { pairFigures } from './pair-figures.ts';
import { PairTable } from './pair-table.tsx';
import { SetupFindings } from './setup-findings.tsx';
import type { PlanExtent } from './uncertainty-field.ts';

interface KeptFitProps {
	fit: FitDetail;
	timeZone: string;
	/** Where a fit of another set-up is looked at. */
	addressOf: (setupId: string, fitId: string) => string;
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	outline: PlanExtent | null;
}

/** A fit as it was kept: nothing in it can be changed. */
export function KeptFit({ fit, timeZone, addressOf, grid, outline }: KeptFitProps) {
	const [chosenName, choose] = useAddressState('at');
	const used = useMemo(() => curedPairs(fit.pairs.pairs, fit.kind, fit.shelves), [fit]);
	const shown = useMemo(() => used.map(({ pair }) => pair), [used]);
	const figures = useMemo(() => pairFigures(shown, fit.result), [shown, fit.result]);
	const shelvings = useMemo(() => new Map(fit.shelves.map((shelving) => [shelving.name, shelving])), [fit.shelves]);
	return (
		<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
			<div className="flex min-w-0 flex-col gap-3.5">
				<Standing fit={fit} timeZone={timeZone} />
				<NetworkFit fit={fit} addressOf={addressOf} />
				<SetupFindings findings={fit.pairs.findings ?? []} voids={null} />
				<FindingCures
					findings={fit.result.findings}
					pairs={fit.pairs.pairs}
					kind={fit.kind}
					knownScale={fit.knownScale}
					shelves={fit.shelves}
					fit={fit.result}
					onCure={null}
				/>
				<PairTable
					pairs={fit.pairs.pairs}
					figures={figures}
					shelvingOf={(name) => shelvings.get(name) ?? { name, shelf: 'in-the-fit', reason: null }}
					mayPart={takesParts(fit.kind)}
					chosenName={chosenName}
					onChoose={choose}
					onMove={null}
				/>
				<Leftovers pairs={fit.pairs} leftOut={used.flatMap(({ pair, isLeftOut }) => (isLeftOut ? [pair.name] : []))} onRelabel={null} />
			</div>
			<div className="flex min-w-0 flex-col gap-3.5">
				<div className="sheet overflow-hidden">
					<FitPlan pairs={shown} fit={fit.result} grid={grid} outline={outline} chosenName={chosenName} onChoose={choose} />
				</div>
				<FitFigures fit={fit.result} inputsSha256={fit.inputsSha256} />
			</div>
		</div>
	);
}

/** Who made, adopted and checked it, each with what they said. */
function Standing({ fit, timeZone }: { fit: FitDetail; timeZone: string }) {
	const { surveyorInCharge: inCharge } = fit;
	const named =
		inCharge && [inCharge.name, inCharge.licence && `licence ${inCharge.licence}`, inCharge.jurisdiction].filter(Boolean).join(', ');
	return (
		<p className="m-0">
			Made by {fit.madeBy}, {isoMoment(fit.madeAt, timeZone)}.{' '}
			{fit.adoptedBy && fit.adoptedAt && `Adopted by ${fit.adoptedBy}, ${isoMoment(fit.adoptedAt, timeZone)}: “${fit.adoptedReason}”. `}
			{fit.checkedBy && fit.checkedAt && `Checked by ${fit.checkedBy}, ${isoMoment(fit.checkedAt, timeZone)}: “${fit.checkedNote}”. `}
			{!fit.checkedBy && (fit.isSecondAsked ? <b>Not checked by a second person. </b> : 'This site asks no second person. ')}
			{named && `Surveyor in charge: ${named}.`}
		</p>
	);
}
