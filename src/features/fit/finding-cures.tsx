import { computeFit } from '#shared/fit/compute-fit.ts';
import type { PairsOfSetup, Shelf, Shelving } from '#shared/fit/contract.ts';
import type { Finding, FitKind, FitResult } from '#shared/fit/fit-schema.ts';
import { shelvedInput } from '#shared/fit/shelved-input.ts';
import { Button } from '#src/ui/button.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';

interface FindingCuresProps {
	findings: readonly Finding[];
	pairs: PairsOfSetup['pairs'];
	kind: FitKind;
	knownScale: number | null;
	shelves: readonly Shelving[];
	fit: FitResult;
	/** Null: this person does not move pairs. */
	onMove: ((names: readonly string[], shelf: Shelf, reason: string) => void) | null;
}

/** Codes whose pairs may be taken out of the fit as a cure. */
const curable = new Set(['blunder', 'target-height', 'swapped-labels', 'one-axis']);

/** Each finding with its evidence, and one press to try the cure: what the fit would be is said before. */
export function FindingCures({ findings, pairs, kind, knownScale, shelves, fit, onMove }: FindingCuresProps) {
	if (findings.length === 0) return null;
	const [first, second, ...others] = findings;
	const card = (finding: Finding) => {
		const isCurable = onMove !== null && curable.has(finding.code) && finding.pairs.length > 0;
		const names = finding.pairs.join(' and ');
		const after = isCurable ? rmsWithout(finding.pairs, pairs, kind, knownScale, shelves) : null;
		return (
			<FindingCard
				key={finding.code + finding.pairs.join()}
				title={finding.message}
				outcome={after !== null && `then rms ${(fit.rms * 1000).toFixed(1)} → ${(after * 1000).toFixed(1)} mm`}
				acts={
					isCurable && (
						<>
							<Button weight="act" onClick={() => onMove(finding.pairs, 'set-aside', finding.message.slice(0, 300))}>
								Set {names} aside
							</Button>
							<Button onClick={() => onMove(finding.pairs, 'held-back', finding.message.slice(0, 300))}>Hold {names} back</Button>
						</>
					)
				}
			>
				{evidenceWords(finding.evidence)}
			</FindingCard>
		);
	};
	return (
		<div className="flex flex-col gap-3.5">
			{first && card(first)}
			{second && card(second)}
			{others.length > 0 && (
				<details className="sheet px-4.5 py-3">
					<summary className="min-h-9 font-medium">{others.length} more findings</summary>
					<div className="mt-3 flex flex-col gap-3.5">{others.map(card)}</div>
				</details>
			)}
		</div>
	);
}

/** The rms without some pairs, metres; null where there is no fit without them. */
function rmsWithout(
	names: readonly string[],
	pairs: PairsOfSetup['pairs'],
	kind: FitKind,
	knownScale: number | null,
	shelves: readonly Shelving[],
): number | null {
	const without: Shelving[] = [
		...shelves.filter(({ name }) => !names.includes(name)),
		...names.map((name) => ({ name, shelf: 'set-aside' as const, reason: null })),
	];
	const outcome = computeFit(shelvedInput(pairs, kind, knownScale, without));
	return outcome.ok ? outcome.result.rms : null;
}

/** Plain figures of the evidence: "normalised 47.2 · critical 3.29". Lists and nested things are left to the record. */
function evidenceWords(evidence: Readonly<Record<string, unknown>>): string | null {
	const figures = Object.entries(evidence).flatMap(([name, value]) => {
		if (typeof value === 'string') return [`${spaced(name)} ${value}`];
		if (typeof value !== 'number' || !Number.isFinite(value)) return [];
		const isMetres = /M$|metres$/i.test(name) && Math.abs(value) < 1;
		return [`${spaced(name.replace(/M$/, ''))} ${isMetres ? `${(value * 1000).toFixed(1)} mm` : Number(value.toPrecision(5))}`];
	});
	return figures.length > 0 ? figures.join(' · ') : null;
}

function spaced(name: string): string {
	return name.replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase();
}
