import { memo, useMemo } from 'react';
import type { StoredElement } from '#shared/model/contract.ts';
import type { PlanScale } from '#src/ui/plan-stage.tsx';
import type { DrawnAxis } from './grid-frame.ts';

interface ModelPlanProps {
	elements: readonly StoredElement[];
	/** Entity numbers that are not drawn. */
	hidden: ReadonlySet<number>;
	axes: readonly DrawnAxis[];
	scale: PlanScale;
}

function footprint({ boxM }: StoredElement, { x, y }: PlanScale): string {
	if (boxM === null) return '';
	const [left, top] = [x(boxM.min[0]), y(boxM.max[1])];
	return `M${left.toFixed(1)} ${top.toFixed(1)}H${x(boxM.max[0]).toFixed(1)}V${y(boxM.min[1]).toFixed(1)}H${left.toFixed(1)}Z`;
}

function areaM2({ boxM }: StoredElement): number {
	return boxM === null ? 0 : (boxM.max[0] - boxM.min[0]) * (boxM.max[1] - boxM.min[1]);
}

/** The model from above: each element's box, large ones under small ones, with the grid and its bubbles. */
export const ModelPlan = memo(function ModelPlan({ elements, hidden, axes, scale }: ModelPlanProps) {
	// One path a tenfold of size: as many nodes for 3 000 elements as for 30.
	const paths = useMemo(() => {
		const bySize = new Map<number, string>();
		for (const element of elements) {
			const area = areaM2(element);
			if (hidden.has(element.entityNumber) || area <= 0) continue;
			const size = Math.ceil(Math.log10(area));
			bySize.set(size, (bySize.get(size) ?? '') + footprint(element, scale));
		}
		return [...bySize].sort((a, b) => b[0] - a[0]);
	}, [elements, hidden, scale]);
	return (
		<>
			{paths.map(([size, path]) => (
				<path key={size} d={path} className="fill-model stroke-model-edge" strokeWidth={0.8} fillOpacity={0.75} />
			))}
			{axes.map((axis) => (
				<g key={`${axis.tag} ${axis.bubble.join()}`}>
					<path
						d={`M${scale.x(axis.bubble[0]).toFixed(1)} ${scale.y(axis.bubble[1]).toFixed(1)}L${scale.x(axis.to[0]).toFixed(1)} ${scale.y(axis.to[1]).toFixed(1)}`}
						className="stroke-rule"
						strokeDasharray="10 3 2 3"
					/>
					<circle cx={scale.x(axis.bubble[0])} cy={scale.y(axis.bubble[1])} r={12} className="fill-sheet stroke-ink" />
					<text x={scale.x(axis.bubble[0])} y={scale.y(axis.bubble[1]) + 5} textAnchor="middle" className="fill-ink text-small">
						{axis.tag}
					</text>
				</g>
			))}
		</>
	);
});

/** The outline of one element in ink, over all others. */
export function ChosenFootprint({ element, scale }: { element: StoredElement; scale: PlanScale }) {
	return <path d={footprint(element, scale)} fill="none" className="stroke-ink" strokeWidth={1.6} />;
}
