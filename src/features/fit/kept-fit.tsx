import { useMemo } from 'react';
import type { FitDetail } from '#shared/fit/contract.ts';
import { useAddressState } from '#src/lib/address-state.ts';
import { isoMoment } from '#src/lib/format.ts';
import { FindingCures } from './finding-cures.tsx';
import { FitFigures } from './fit-figures.tsx';
import { FitPlan } from './fit-plan.tsx';
import { pairFigures } from './pair-figures.ts';
import { PairTable } from './pair-table.tsx';
import type { PlanExtent } from './uncertainty-field.ts';

interface KeptFitProps {
	fit: FitDetail;
	timeZone: string;
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	outline: PlanExtent | null;
}

/** A fit as it was kept: nothing in it can be changed. */
export function KeptFit({ fit, timeZone, grid, outline }: KeptFitProps) {
	const [chosenName, choose] = useAddressState('at');
	const figures = useMemo(() => pairFigures(fit.pairs.pairs, fit.result), [fit]);
	const shelvings = useMemo(() => new Map(fit.shelves.map((shelving) => [shelving.name, shelving])), [fit.shelves]);
	return (
		<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
			<div className="flex min-w-0 flex-col gap-3.5">
				<p className="m-0">
					Made by {fit.madeBy}, {isoMoment(fit.madeAt, timeZone)}.{' '}
					{fit.adoptedBy && fit.adoptedAt && `Adopted by ${fit.adoptedBy}, ${isoMoment(fit.adoptedAt, timeZone)}: “${fit.adoptedReason}”. `}
					{fit.checkedBy ? `Checked by ${fit.checkedBy}.` : <b>Not checked by a second person.</b>}
				</p>
				<FindingCures
					findings={fit.result.findings}
					pairs={fit.pairs.pairs}
					kind={fit.kind}
					knownScale={fit.knownScale}
					shelves={fit.shelves}
					fit={fit.result}
					onMove={null}
				/>
				<PairTable
					pairs={fit.pairs.pairs}
					figures={figures}
					shelfOf={(name) => shelvings.get(name)?.shelf ?? 'in-the-fit'}
					reasonOf={(name) => shelvings.get(name)?.reason ?? null}
					chosenName={chosenName}
					onChoose={choose}
					onMove={null}
				/>
			</div>
			<div className="flex min-w-0 flex-col gap-3.5">
				<div className="sheet overflow-hidden">
					<FitPlan pairs={fit.pairs.pairs} fit={fit.result} grid={grid} outline={outline} chosenName={chosenName} onChoose={choose} />
				</div>
				<FitFigures fit={fit.result} inputsSha256={fit.inputsSha256} />
			</div>
		</div>
	);
}
