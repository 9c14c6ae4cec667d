import { type DragEvent, type KeyboardEvent, memo, type ReactNode, useRef, useState } from 'react';
import type { PairsOfSetup, Shelf, Shelving } from '#shared/fit/contract.ts';
import { noFigure, signedNumber } from '#src/lib/format.ts';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';
import { scrollStop } from '#src/ui/scroll-stop.ts';
import { type Axis, axisNames, type PairFigures, pairSentence } from './pair-figures.ts';
import type { PairPlace } from './shelves-state.ts';

export const shelfWords: Record<Shelf, string> = { 'in-the-fit': 'In the fit', 'held-back': 'Held back', 'set-aside': 'Set aside' };
const shelfOrder = ['in-the-fit', 'held-back', 'set-aside'] as const;
const whole = (shelf: Shelf): PairPlace => ({ shelf, use: 'all' });
const shelfKeys: Record<string, PairPlace> = {
	f: whole('in-the-fit'),
	h: whole('held-back'),
	a: whole('set-aside'),
	p: { shelf: 'in-the-fit', use: 'plan' },
	l: { shelf: 'in-the-fit', use: 'level' },
};
/** Where a pair can be put, in the order of the list. */
const placeOptions: readonly { place: PairPlace; label: string }[] = [
	{ place: shelfKeys.f ?? whole('in-the-fit'), label: 'In the fit' },
	{ place: { shelf: 'in-the-fit', use: 'plan' }, label: 'In plan only' },
	{ place: { shelf: 'in-the-fit', use: 'level' }, label: 'In level only' },
	{ place: whole('held-back'), label: 'Held back' },
	{ place: whole('set-aside'), label: 'Set aside' },
];
const placeKey = ({ shelf, use }: PairPlace) => `${shelf} ${use}`;

interface PairTableProps {
	pairs: PairsOfSetup['pairs'];
	figures: ReadonlyMap<string, PairFigures>;
	shelvingOf: (name: string) => Shelving;
	/** This kind of fit may use a pair in plan or in level only. */
	mayPart: boolean;
	chosenName: string | null;
	onChoose: (name: string) => void;
	/** Null: this person does not move pairs, or the fit is already made. Keep it the same function. */
	onMove: ((name: string, place: PairPlace) => void) | null;
}

/** Every pair on its shelf, with its misfit; moved by press, drag or key (F in the fit, P plan only, L level only, H held back, A set aside). */
export function PairTable({ pairs, figures, shelvingOf, mayPart, chosenName, onChoose, onMove }: PairTableProps) {
	const shelfOf = (name: string) => shelvingOf(name).shelf;
	const [overShelf, setOverShelf] = useState<Shelf | null>(null);
	const body = useRef<HTMLTableElement>(null);
	const shown = [...figures.values()];
	const scaleMm = rodScaleMm(
		shown.map(({ boundMm, worstAxis }) => [null, boundMm[worstAxis]]),
		shown.map(({ residualMm, worstAxis }) => residualMm[worstAxis]),
	);
	const ordered = shelfOrder.flatMap((shelf) => pairs.filter(({ name }) => shelfOf(name) === shelf));
	const step = (event: KeyboardEvent) => {
		const at = ordered.findIndex(({ name }) => name === chosenName);
		const move = event.key === 'ArrowDown' ? 1 : event.key === 'ArrowUp' ? -1 : 0;
		if (move !== 0) {
			event.preventDefault();
			const next = ordered[Math.max(0, Math.min(ordered.length - 1, at + move))];
			if (!next) return;
			onChoose(next.name);
			body.current?.querySelector<HTMLButtonElement>(`[data-pair="${CSS.escape(next.name)}"]`)?.focus();
		}
		const place = shelfKeys[event.key.toLowerCase()];
		const isCommand = !event.ctrlKey && !event.metaKey && !event.altKey && !(event.target instanceof HTMLSelectElement);
		if (!place || !isCommand || !onMove || !chosenName || (place.use !== 'all' && !mayPart)) return;
		if (placeKey(place) !== placeKey(placeOf(shelvingOf(chosenName)))) onMove(chosenName, place);
	};
	const drop = (event: DragEvent, shelf: Shelf) => {
		event.preventDefault();
		setOverShelf(null);
		const name = event.dataTransfer.getData('text/plain');
		if (onMove && pairs.some((pair) => pair.name === name) && shelfOf(name) !== shelf) onMove(name, whole(shelf));
	};
	return (
		<div ref={scrollStop} className="sheet overflow-x-auto">
			<table ref={body} className="w-full border-collapse" onKeyDown={step}>
				<thead className="border-b border-ink text-small text-second">
					<tr>
						<th scope="col" className="px-3 py-2.5 text-left font-medium">
							Target
						</th>
						{axisNames.map((axis) => (
							<th key={axis} scope="col" className="px-2 py-2.5 text-right font-medium">
								{axis}
							</th>
						))}
						<th scope="col" className="px-2 py-2.5 text-left font-medium max-desk:hidden">
							Worst axis against chance
						</th>
						<th scope="col" className="px-2 py-2.5 text-right font-medium max-tablet:hidden">
							Left out
						</th>
						{onMove && (
							<th scope="col" className="px-3 py-2.5 text-left font-medium max-tablet:hidden">
								Shelf
							</th>
						)}
					</tr>
				</thead>
				{shelfOrder.map((shelf) => {
					const here = pairs.filter(({ name }) => shelfOf(name) === shelf);
					return (
						<tbody
							key={shelf}
							onDragOver={(event) => {
								if (!onMove) return;
								event.preventDefault();
								setOverShelf(shelf);
							}}
							onDragLeave={() => setOverShelf(null)}
							onDrop={(event) => drop(event, shelf)}
							className={overShelf === shelf ? 'outline-2 -outline-offset-2 outline-dashed outline-ink' : ''}
						>
							<tr className="border-b border-hair bg-ground">
								<th scope="colgroup" colSpan={onMove ? 7 : 6} className="h-11 px-3 text-left font-strong">
									{shelfWords[shelf]} <span className="font-normal text-second">{here.length === 0 ? 'nothing' : here.length}</span>
								</th>
							</tr>
							{here.map((pair) => (
								<PairRow
									key={pair.name}
									figures={figures.get(pair.name)}
									name={pair.name}
									shelving={shelvingOf(pair.name)}
									mayPart={mayPart}
									scaleMm={scaleMm}
									isChosen={pair.name === chosenName}
									onChoose={onChoose}
									onMove={onMove}
								/>
							))}
						</tbody>
					);
				})}
			</table>
		</div>
	);
}

interface PairRowProps {
	name: string;
	figures: PairFigures | undefined;
	shelving: Shelving;
	mayPart: boolean;
	scaleMm: number;
	isChosen: boolean;
	onChoose: (name: string) => void;
	onMove: ((name: string, place: PairPlace) => void) | null;
}

const PairRow = memo(function PairRow({ name, figures, shelving, mayPart, scaleMm, isChosen, onChoose, onMove }: PairRowProps) {
	const { reason, exchangedWith } = shelving;
	const place = placeOf(shelving);
	const cured = [exchangedWith && `takes the sighting labelled ${exchangedWith}`, place.use !== 'all' && `${place.use} only`]
		.filter(Boolean)
		.join(', ');
	const axis: Axis = figures?.worstAxis ?? 2;
	const bound = figures?.boundMm[axis] ?? null;
	const note = [cured, reason].filter(Boolean).join(': ');
	return (
		<>
			<tr
				draggable={onMove !== null}
				onDragStart={(event) => event.dataTransfer.setData('text/plain', name)}
				className={`${note ? '' : 'border-b border-hair'} ${onMove ? 'max-tablet:border-b-0' : ''} ${isChosen ? 'row-chosen' : ''}`}
			>
				<th scope="row" className="h-11 px-3 text-left font-strong">
					<button
						type="button"
						data-pair={name}
						aria-pressed={isChosen}
						onClick={() => onChoose(name)}
						className="min-h-11 w-full text-left pointer-coarse:min-h-12"
					>
						{name}
					</button>
				</th>
				{figures?.residualMm.map((value, index) => (
					<td key={axisNames[index]} className={`px-2 text-right ${figures.isBeyond && index === axis ? 'font-strong' : ''}`}>
						{figure(value)}
					</td>
				))}
				<td className="px-2 max-desk:hidden">
					{figures && (figures.residualMm[axis] ?? null) !== null && (
						<span className="flex items-center gap-2">
							<Rod
								deviationMm={figures.residualMm[axis]}
								limitsMm={bound === null ? null : [-bound, bound]}
								expandedUncertaintyMm={null}
								scaleMm={scaleMm}
								glyph={figures.isBeyond ? ((figures.residualMm[axis] ?? 0) >= 0 ? 'proud' : 'shy') : 'within'}
								sentence={pairSentence(figures)}
								widthPx={116}
							/>
							<span className="text-small text-second">{axisNames[axis].toLowerCase()}</span>
						</span>
					)}
				</td>
				<td className="px-2 text-right max-tablet:hidden">{figure(figures?.leftOutMm?.[axis] ?? null)}</td>
				{onMove && (
					<td className="px-3 max-tablet:hidden">
						<ShelfSelect name={name} place={place} mayPart={mayPart} onMove={onMove} />
					</td>
				)}
			</tr>
			{/* A phone has no room for a column of shelves: there it stands below the figures. */}
			{(note || onMove) && (
				<tr className={`border-b border-hair ${note ? '' : 'tablet:hidden'}`}>
					<td colSpan={onMove ? 7 : 6} className="px-3 pb-2.5 text-small text-second">
						{note}
						{onMove && (
							<span className="mt-1 block tablet:hidden">
								<ShelfSelect name={name} place={place} mayPart={mayPart} onMove={onMove} />
							</span>
						)}
					</td>
				</tr>
			)}
		</>
	);
});

interface ShelfSelectProps {
	name: string;
	place: PairPlace;
	mayPart: boolean;
	onMove: (name: string, place: PairPlace) => void;
}

function ShelfSelect({ name, place, mayPart, onMove }: ShelfSelectProps) {
	return (
		<label>
			<span className="sr-only">Shelf of {name}</span>
			<select
				value={placeKey(place)}
				onChange={(event) => {
					const wanted = placeOptions.find((option) => placeKey(option.place) === event.currentTarget.value);
					if (wanted) onMove(name, wanted.place);
				}}
				className="min-h-9 rounded-corner border border-field bg-sheet px-2 text-ink pointer-coarse:min-h-12"
			>
				{optionsFor(place, mayPart).map((option) => (
					<option key={placeKey(option.place)} value={placeKey(option.place)}>
						{option.label}
					</option>
				))}
			</select>
		</label>
	);
}

function placeOf({ shelf, use = 'all' }: Shelving): PairPlace {
	return { shelf, use };
}

/** Parts only where the fit takes them, and where the pair lies now in any case. */
function optionsFor(now: PairPlace, mayPart: boolean): readonly { place: PairPlace; label: string }[] {
	const usual = placeOptions.filter(({ place }) => place.use === 'all' || mayPart || placeKey(place) === placeKey(now));
	if (usual.some(({ place }) => placeKey(place) === placeKey(now))) return usual;
	return [...usual, { place: now, label: `${shelfWords[now.shelf]}, ${now.use} only` }];
}

function figure(valueMm: number | null): ReactNode {
	if (valueMm === null) return noFigure;
	// Gross mistakes are metres, and a column of millimetres would push the rest of the table away.
	const text = Math.abs(valueMm) >= 1000 ? `${signedNumber(valueMm / 1000, 2)} m` : signedNumber(valueMm, 1);
	return Number(valueMm.toFixed(1)) > 0 ? `+${text}` : text;
}
