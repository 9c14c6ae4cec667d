import { useMemo } from 'react';
import type { PairsOfSetup, Shelving } from '#shared/fit/contract.ts';
import type { Finding, FitKind, FitResult } from '#shared/fit/fit-schema.ts';
import { Button } from '#src/ui/button.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { type Cure, curesOf, type FitWorth, worthOf, worthWith } from './cures.ts';

interface FindingCuresProps {
	findings: readonly Finding[];
	pairs: PairsOfSetup['pairs'];
	kind: FitKind;
	knownScale: number | null;
	shelves: readonly Shelving[];
	fit: FitResult;
	/** Null: this person does not move pairs, or the fit is kept already. */
	onCure: ((cure: Cure, reason: string) => void) | null;
	/** The pairs have changed since and the search runs again: these findings are of before. */
	isSearching?: boolean;
}

/** Each finding with its evidence, and one press to try the cure: what the fit would be is said before, side by side. */
export function FindingCures({ findings, isSearching = false, ...about }: FindingCuresProps) {
	if (findings.length === 0) return null;
	const [first, second, ...others] = findings;
	const card = (finding: Finding) => (
		<OneFinding key={finding.code + finding.pairs.join()} finding={finding} isSearching={isSearching} {...about} />
	);
	return (
		<div className={`flex flex-col gap-3.5 ${isSearching ? 'opacity-60' : ''}`} aria-busy={isSearching}>
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

type OneFindingProps = Omit<FindingCuresProps, 'findings'> & { finding: Finding };

function OneFinding({ finding, pairs, kind, knownScale, shelves, fit, onCure, isSearching = false }: OneFindingProps) {
	const stories = useMemo(() => (onCure === null ? [] : curesOf(finding, kind)), [finding, kind, onCure]);
	const outcomes = useMemo(
		() => (isSearching ? null : stories.map(({ cures }) => cures.map((cure) => worthWith(cure, { pairs, kind, knownScale, shelves })))),
		[isSearching, stories, pairs, kind, knownScale, shelves],
	);
	const now = worthOf(fit);
	return (
		<FindingCard title={finding.message}>
			{evidenceWords(finding.evidence)}
			{stories.map(({ title, cures }, index) => (
				<div key={title ?? ''} className="mt-3 text-ink">
					{title && <h3 className="m-0 mb-1.5 text-body font-strong">{title}</h3>}
					<ul className="m-0 flex list-none flex-col gap-2 p-0">
						{cures.map((cure, place) => (
							<li key={cure.label} className="flex flex-wrap items-center gap-x-3 gap-y-1">
								<Button
									weight={place === 0 && title === null ? 'act' : 'quiet'}
									whyNot={isSearching ? 'The pairs have changed; the search runs again.' : null}
									onClick={() => onCure?.(cure, (title ?? finding.message).slice(0, 300))}
								>
									{cure.label}
								</Button>
								<Outcome before={now} after={outcomes?.[index]?.[place] ?? null} isKnown={outcomes !== null} />
							</li>
						))}
					</ul>
				</div>
			))}
		</FindingCard>
	);
}

/** "rms 33.4 → 1.7 mm · variance factor 812 → 1.1 · worst 47 → 1.9 σ". */
function Outcome({ before, after, isKnown }: { before: FitWorth; after: FitWorth | null; isKnown: boolean }) {
	if (!isKnown) return null;
	if (after === null) return <span className="text-strip text-second">then there is no fit</span>;
	const factor = (worth: FitWorth) => (worth.varianceFactor === null ? '–' : short(worth.varianceFactor));
	return (
		<span className="text-strip text-second">
			then rms {mm(before.rmsM)} → <b className="text-ink">{mm(after.rmsM)}</b>
			{before.sigmaGiven && ` · variance factor ${factor(before)} → ${factor(after)}`}
			{before.worst &&
				after.worst &&
				` · worst ${short(before.worst.normalised)} → ${short(after.worst.normalised)} of ${short(after.worst.critical)}`}
		</span>
	);
}

function mm(valueM: number): string {
	return valueM >= 1 ? `${valueM.toFixed(2)} m` : `${(valueM * 1000).toFixed(1)} mm`;
}

function short(value: number): string {
	if (value >= 1e5) return 'over 100 000';
	return value >= 100 ? value.toFixed(0) : value.toFixed(1);
}

/** Plain figures of the evidence: "normalised 47.2 · critical 3.29". Lists and nested things are left to the record. */
function evidenceWords(evidence: Readonly<Record<string, unknown>>): string | null {
	const figures = Object.entries(evidence).flatMap(([name, value]) => {
		if (name === 'misfits' && Array.isArray(value)) return value.flatMap(misfitWords);
		if (name === 'agreeing' && typeof value === 'number') return [`${value} pairs agree`];
		if (typeof value === 'string') return [`${spaced(name)} ${value}`];
		if (typeof value !== 'number' || !Number.isFinite(value)) return [];
		const isMetres = /M$|metres$/i.test(name) && Math.abs(value) < 1;
		return [`${spaced(name.replace(/M$/, ''))} ${isMetres ? `${(value * 1000).toFixed(1)} mm` : Number(value.toPrecision(5))}`];
	});
	return figures.length > 0 ? figures.join(' · ') : null;
}

/** "T7: 0.2 east, 1.1 north, 95.4 low against the others, mm" of one misfit of the evidence. */
function misfitWords(misfit: unknown): string[] {
	if (typeof misfit !== 'object' || misfit === null || !('pair' in misfit) || !('metres' in misfit)) return [];
	const { pair, metres } = misfit;
	if (typeof pair !== 'string' || !Array.isArray(metres)) return [];
	const words = [
		['east', 'west'],
		['north', 'south'],
		['high', 'low'],
	] as const;
	const parts = metres.flatMap((value: unknown, axis) => {
		const pairOfWords = words[axis];
		if (typeof value !== 'number' || !pairOfWords) return [];
		return [`${Math.abs(value * 1000).toFixed(1)} ${pairOfWords[value >= 0 ? 0 : 1]}`];
	});
	return [`${pair} against the others, mm: ${parts.join(', ')}`];
}

function spaced(name: string): string {
	return name.replace(/([a-z])([A-Z])/g, '$1 $2').toLowerCase();
}
