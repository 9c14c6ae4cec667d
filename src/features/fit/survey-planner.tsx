import { useDeferredValue, useMemo, useState } from 'react';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Chip } from '#src/ui/chip.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { ExpectedTable } from './expected-table.tsx';
import { FitPlan } from './fit-plan.tsx';
import { PlanChoices } from './plan-choices.tsx';
import {
	bestAdditions,
	type ExpectedSurvey,
	expectSurvey,
	type GroupedCheckpoint,
	type PlannedInstrument,
	type PlannedMark,
} from './survey-plan.ts';
import type { PlanExtent } from './uncertainty-field.ts';

interface SurveyPlannerProps {
	/** The control that could be sighted, with σ. */
	marks: readonly PlannedMark[];
	/** Marks that cannot be planned with, and why. */
	withoutSigma: readonly string[];
	checkpoints: readonly GroupedCheckpoint[];
	grid: readonly { tag: string; points: readonly (readonly [number, number])[] }[];
	outline: PlanExtent | null;
}

const usual: PlannedInstrument = { fit: 'levelled', targetPlanMm: 1.5, targetHeightMm: 1, shotPlanMm: 2, shotHeightMm: 1.5, commonMm: 2 };

/** Before going out: which marks, which instrument, and what could be told with them. Nothing is stored. */
export function SurveyPlanner({ marks, withoutSigma, checkpoints, grid, outline }: SurveyPlannerProps) {
	const [instrument, setInstrument] = useState(usual);
	const [leftOut, setLeftOut] = useState<ReadonlySet<string>>(new Set());
	const [chosenName, choose] = useState<string | null>(null);
	const wanted = useMemo(() => ({ instrument, leftOut }), [instrument, leftOut]);
	// Thousands of checkpoints take a few frames: what is typed stays ahead of it.
	const planned = useDeferredValue(wanted);
	const sighted = useMemo(() => marks.filter(({ name }) => !planned.leftOut.has(name)), [marks, planned]);
	const unused = useMemo(() => marks.filter(({ name }) => planned.leftOut.has(name)), [marks, planned]);
	const outcome = useMemo(() => expectSurvey(sighted, planned.instrument, checkpoints), [sighted, planned, checkpoints]);
	const additions = useMemo(() => bestAdditions(sighted, unused, planned.instrument, checkpoints), [sighted, unused, planned, checkpoints]);
	const expected = outcome.ok ? outcome.expected : null;
	const toggle = (name: string) =>
		setLeftOut((before) => {
			const next = new Set(before);
			if (!next.delete(name)) next.add(name);
			return next;
		});
	return (
		<>
			<Headline title="Before going out">{headlineOf(expected, sighted.length)}</Headline>
			<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
				<div className="flex min-w-0 flex-col gap-4">
					<PlanChoices instrument={instrument} onInstrument={setInstrument} />
					<fieldset className="m-0 border-0 p-0">
						<legend className="mb-1.5 p-0 font-medium">Marks that will be sighted</legend>
						<div className="flex flex-wrap gap-2">
							{marks.map(({ name }) => (
								<Chip key={name} isOn={!leftOut.has(name)} onChange={() => toggle(name)}>
									{name}
								</Chip>
							))}
						</div>
						{withoutSigma.length > 0 && (
							<p className="mt-2 mb-0 text-small text-second">
								Not planned with, since their place or σ is not known whole: {withoutSigma.join(', ')}.
							</p>
						)}
					</fieldset>
					{!outcome.ok && (
						<Notice kind="wrong" title="These marks do not determine a fit">
							{outcome.refusal.message}
						</Notice>
					)}
					{additions.map(({ mark, isKnown, beforeMm, afterMm }) => (
						<FindingCard
							key={String(isKnown)}
							title={
								isKnown
									? `Of the marks left out ${mark.name} would help most`
									: `A new mark would help most near E ${mark.place[0].toFixed(0)}, N ${mark.place[1].toFixed(0)} m`
							}
							outcome={`the fit’s worst place then ±${beforeMm.toFixed(1)} → ±${afterMm.toFixed(1)} mm`}
							acts={isKnown && <Button onClick={() => toggle(mark.name)}>Sight {mark.name} too</Button>}
						/>
					))}
					{expected && <ExpectedTable groups={expected.groups} />}
					{expected && <Revealed expected={expected} />}
				</div>
				<div className="sheet self-start overflow-hidden">
					<FitPlan
						pairs={expected?.pairs ?? []}
						fit={expected?.fit ?? null}
						grid={grid}
						outline={outline}
						chosenName={chosenName}
						onChoose={choose}
						caption="Dotted: the fit alone would be known to ± that many mm in plan, 95 %."
					/>
				</div>
			</div>
		</>
	);
}

/** What each target would reveal of itself: a target that nothing checks is none. */
function Revealed({ expected }: { expected: ExpectedSurvey }) {
	const shown = expected.smallestBlunders.map(
		({ target, metres }) => `${target} ${metres === null ? 'nothing' : `${(metres * 1000).toFixed(1)} mm`}`,
	);
	return (
		<p className="m-0 text-second">
			Smallest blunder at each target that the others would reveal: {shown.join(', ')}. Hold one more back as an independent check. U is 2u;
			Cm is the tolerance’s width over 4u: 3 is wanted, under 1 nothing could ever be called within (JCGM 106, 7.6).
		</p>
	);
}

function headlineOf(expected: ExpectedSurvey | null, markCount: number): string {
	if (!expected) return 'With these marks there would be no fit';
	const { neverDecided, doubtful, withTolerance } = expected;
	const marks = counted(markCount, 'mark');
	if (withTolerance === 0) return `${marks}: no tolerance is set yet to hold this against`;
	if (neverDecided > 0) return `${marks} and this instrument could never decide ${neverDecided} of ${counted(withTolerance, 'checkpoint')}`;
	if (doubtful > 0) return `${marks} and this instrument decide all but what lies near its limits`;
	return `${marks} and this instrument can decide all ${counted(withTolerance, 'checkpoint')}`;
}
