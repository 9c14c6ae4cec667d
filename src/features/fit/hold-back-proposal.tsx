import { useMemo } from 'react';
import type { Finding, FitInput, FitResult } from '#shared/fit/fit-schema.ts';
import { leastNeededPair } from '#shared/fit/least-needed-pair.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import { Button } from '#src/ui/button.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import type { PlanExtent } from './uncertainty-field.ts';

interface HoldBackProposalProps {
	input: FitInput;
	fit: FitResult;
	/** Who is accused is no check. */
	findings: readonly Finding[];
	/** The model in plan; null where there is none: then the targets stand for where the fit is used. */
	outline: PlanExtent | null;
	/** Null: this person does not move pairs. */
	onHold: ((name: string, reason: string) => void) | null;
}

/** Where no pair is held back nothing checks the fit: one press holds back the pair that it needs least. */
export function HoldBackProposal({ input, fit, findings, outline, onHold }: HoldBackProposalProps) {
	const isChecked = input.pairs.some(({ heldBack }) => heldBack);
	const proposal = useMemo(() => {
		if (isChecked) return null;
		const accused = new Set(findings.flatMap(({ pairs }) => pairs));
		return leastNeededPair(input, placesOfUse(input, outline), (name) => !accused.has(name));
	}, [isChecked, input, findings, outline]);
	if (isChecked) return null;
	if (proposal === null) {
		return (
			<FindingCard title="No pair is held back, and none can be spared">
				The residuals of {fit.pairs.length === 1 ? 'one pair' : `${fit.pairs.length} pairs`} alone are no independent check. Sight one more
				target.
			</FindingCard>
		);
	}
	const { name, beforeM, afterM } = proposal;
	return (
		<FindingCard
			title="No pair is held back: nothing independent checks this fit"
			acts={
				<Button
					whyNot={onHold === null ? 'A site engineer moves pairs.' : null}
					onClick={() => onHold?.(name, 'Independent check: the pair that the fit needs least')}
				>
					Hold {name} back
				</Button>
			}
			outcome={`the fit’s worst point error over the ${outline ? 'model' : 'targets'}, 2σ, then ${mm(beforeM)} → ${mm(afterM)} mm`}
		>
			{name} is the pair that the fit needs least: holding any other back costs more there.
		</FindingCard>
	);
}

/** The corners and the middle of the model's outline at the height of the control, or the control itself; design frame, metres. */
function placesOfUse({ pairs }: FitInput, outline: PlanExtent | null): Vector3[] {
	const heights = pairs.flatMap(({ control }) => control[2] ?? []);
	const height = heights.reduce((sum, value) => sum + value / heights.length, 0);
	if (!outline) {
		return pairs.flatMap(({ control: [east, north, level] }): Vector3[] =>
			east === null || north === null ? [] : [[east, north, level ?? height]],
		);
	}
	const { minE, minN, maxE, maxN } = outline;
	return [
		[minE, minN, height],
		[minE, maxN, height],
		[maxE, minN, height],
		[maxE, maxN, height],
		[(minE + maxE) / 2, (minN + maxN) / 2, height],
	];
}

function mm(valueM: number): string {
	return (valueM * 1000).toFixed(2);
}
