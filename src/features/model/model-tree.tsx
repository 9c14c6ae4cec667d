import { counted } from '#src/lib/format.ts';
import { classWords, type ModelPlace, type TreeBranch } from './model-place.ts';

interface ModelTreeProps {
	tree: readonly TreeBranch[];
	place: ModelPlace;
	onPlace: (place: ModelPlace) => void;
}

const line =
	'flex min-h-9 w-full items-baseline gap-2 rounded-corner px-2 py-1.5 text-left hover:bg-ground aria-pressed:shadow-[inset_0_0_0_1.5px_var(--color-ink)] pointer-coarse:min-h-12 pointer-coarse:items-center';

/** The model by storey and class, each with what it has and how much of it has no checkpoint. A press narrows the list beside it. */
export function ModelTree({ tree, place, onPlace }: ModelTreeProps) {
	const total = tree.reduce((sum, { elementCount }) => sum + elementCount, 0);
	return (
		<nav aria-label="Storeys and classes" className="sheet p-1.5">
			<button
				type="button"
				aria-pressed={place.storey === null}
				onClick={() => onPlace({ storey: null, class: null })}
				className={`${line} font-strong`}
			>
				<span className="min-w-0 flex-1">Whole model</span>
				<Counts elementCount={total} withoutCount={tree.reduce((sum, { withoutCount }) => sum + withoutCount, 0)} />
			</button>
			<ul className="m-0 list-none p-0">
				{tree.map((branch) => (
					<li key={branch.storey}>
						<button
							type="button"
							aria-pressed={place.storey === branch.storey && place.class === null}
							onClick={() => onPlace({ storey: branch.storey, class: null })}
							className={`${line} font-medium`}
						>
							<span className="min-w-0 flex-1">{branch.storey}</span>
							<Counts {...branch} />
						</button>
						{(place.storey === branch.storey || tree.length === 1) && (
							<ul className="m-0 mb-1 ml-3 list-none border-l border-l-rule p-0 pl-1">
								{branch.classes.map((leaf) => (
									<li key={leaf.class}>
										<button
											type="button"
											aria-pressed={place.storey === branch.storey && place.class === leaf.class}
											onClick={() => onPlace({ storey: branch.storey, class: leaf.class })}
											className={line}
										>
											<span className="min-w-0 flex-1">{classWords(leaf.class)}</span>
											<Counts {...leaf} />
										</button>
									</li>
								))}
							</ul>
						)}
					</li>
				))}
			</ul>
		</nav>
	);
}

function Counts({ elementCount, withoutCount }: { elementCount: number; withoutCount: number }) {
	return (
		<span className="shrink-0 text-second" title={`${counted(elementCount, 'element')}, ${withoutCount} of them without checkpoints`}>
			{elementCount}
			{withoutCount > 0 && <span className="text-small"> ({withoutCount} without)</span>}
		</span>
	);
}
