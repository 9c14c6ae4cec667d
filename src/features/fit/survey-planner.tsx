import { useDeferredValue, useMemo, useState } from 'react';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Chip } from '#src/ui/chip.tsx';
import { FindingCard } from '#src/ui/finding-card.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { bestAdditions } from './best-additions.ts';
import { ExpectedTable } from './expected-table.tsx';
import { FitPlan } from './fit-plan.tsx';
import { PlanChoices } from './plan-choices.tsx';
import type { GroupedCheckpoint } from './planned-checkpoints.ts';
import { PlannedTable } from './planned-table.tsx';
import { StationChoices } from './station-choices.tsx';
import {
	type ExpectedStation,
	type ExpectedSurvey,
	expectSurvey,
	type PlannedInstrument,
	type PlannedMark,
	type PlannedStation,
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

/** Common practice for a total station of today on prisms; to be replaced by what its certificate says. */
const usual: PlannedInstrument = {
	fit: 'levelled',
	distanceMm: 1.5,
	distancePpm: 2,
	angleSec: 3,
	targetMm: 0.7,
	shotMm: 1.5,
	commonMm: 1,
	reachM: 150,
};

/** Before going out: which marks, from where, with which instrument, and what could be told with them. Nothing is stored. */
export function SurveyPlanner({ marks, withoutSigma, checkpoints, grid, outline }: SurveyPlannerProps) {
	const middle = useMemo(() => middleOf(checkpoints, marks), [checkpoints, marks]);
	const [instrument, setInstrument] = useState(usual);
	const [stations, setStations] = useState<readonly PlannedStation[]>([{ name: 'S1', place: middle }]);
	const [leftOut, setLeftOut] = useState<ReadonlySet<string>>(new Set());
	const [chosenName, choose] = useState<string | null>(null);
	const [pictured, setPictured] = useState('S1');
	const wanted = useMemo(() => ({ instrument, stations, leftOut }), [instrument, stations, leftOut]);
	// Thousands of checkpoints take a few frames: what is typed stays ahead of it.
	const planned = useDeferredValue(wanted);
	const sighted = useMemo(() => marks.filter(({ name }) => !planned.leftOut.has(name)), [marks, planned]);
	const unused = useMemo(() => marks.filter(({ name }) => planned.leftOut.has(name)), [marks, planned]);
	const outcome = useMemo(() => expectSurvey(sighted, planned.instrument, planned.stations, checkpoints), [sighted, planned, checkpoints]);
	const additions = useMemo(
		() => bestAdditions(sighted, unused, planned.instrument, planned.stations, checkpoints),
		[sighted, unused, planned, checkpoints],
	);
	const expected = outcome.ok ? outcome.expected : null;
	const station = expected?.stations.find(({ name }) => name === pictured) ?? expected?.stations[0] ?? null;
	const toggle = (name: string) =>
		setLeftOut((before) => {
			const next = new Set(before);
			if (!next.delete(name)) next.add(name);
			return next;
		});
	return (
		<>
			<Headline title="Before going out">{headlineOf(expected, sighted.length, planned.stations.length)}</Headline>
			<div className="grid gap-4 desk:grid-cols-[minmax(0,1fr)_minmax(0,34rem)]">
				<div className="flex min-w-0 flex-col gap-4">
					<PlanChoices instrument={instrument} onInstrument={setInstrument} />
					<StationChoices stations={stations} nextPlace={middle} onStations={setStations} />
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
						<Notice kind="wrong" title={`The marks in reach of ${outcome.stationName} do not determine a fit`}>
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
							outcome={`worst place of the fit then ±${beforeMm.toFixed(1)} → ±${afterMm.toFixed(1)} mm`}
							acts={isKnown && <Button onClick={() => toggle(mark.name)}>Sight {mark.name} too</Button>}
						/>
					))}
					{expected && <ExpectedTable groups={expected.groups} />}
					{expected?.stations.map((one) => (
						<Revealed key={one.name} station={one} />
					))}
					<p className="m-0 text-second">
						Each checkpoint is taken to be shot from the station nearest to it. Hold one more target back as an independent check. U is 2u;
						Cm is the tolerance’s width over 4u: 3 is wanted, under 1 nothing could ever be called within (JCGM 106, 7.6).
					</p>
				</div>
				<div className="flex min-w-0 flex-col gap-4">
					<div className="sheet self-start w-full overflow-hidden">
						{stations.length > 1 && (
							<div className="flex flex-wrap gap-2 p-3">
								{stations.map(({ name }) => (
									<Chip key={name} isOn={name === station?.name} onChange={() => setPictured(name)}>
										{name}
									</Chip>
								))}
							</div>
						)}
						<FitPlan
							pairs={station?.pairs ?? []}
							fit={station?.fit ?? null}
							stations={planned.stations}
							grid={grid}
							outline={outline}
							chosenName={chosenName}
							onChoose={choose}
							caption="Dotted: the fit alone would be known to ± that many mm in plan, 95 %. Triangles: stations."
						/>
					</div>
				</div>
			</div>
			{expected && (
				<section className="mt-4">
					<h2 className="mb-3 text-h2 font-strong">Checkpoint by checkpoint</h2>
					<PlannedTable checkpoints={expected.checkpoints} />
				</section>
			)}
		</>
	);
}

/** What each target would reveal of itself: a target that nothing checks is none. */
function Revealed({ station }: { station: ExpectedStation }) {
	const shown = station.smallestBlunders.map(
		({ target, metres }) => `${target} ${metres === null ? 'nothing' : `${(metres * 1000).toFixed(1)} mm`}`,
	);
	return (
		<p className="m-0 text-second">
			From {station.name}, the smallest blunder at each target that the others would reveal: {shown.join(', ')}.
		</p>
	);
}

/** The middle of what is to be measured, at the height of the marks; to the decimetre, since it is typed over. */
function middleOf(checkpoints: readonly GroupedCheckpoint[], marks: readonly PlannedMark[]): PlannedStation['place'] {
	const places = (checkpoints.length > 0 ? checkpoints : marks).map(({ place }) => place);
	const level = marks.reduce((sum, { place }) => sum + place[2] / marks.length, 0);
	const middle = (axis: 0 | 1) => {
		const least = places.reduce((a, place) => Math.min(a, place[axis]), Number.POSITIVE_INFINITY);
		const most = places.reduce((a, place) => Math.max(a, place[axis]), Number.NEGATIVE_INFINITY);
		return places.length > 0 ? Math.round(5 * (least + most)) / 10 : 0;
	};
	return [middle(0), middle(1), Math.round(10 * level) / 10];
}

function headlineOf(expected: ExpectedSurvey | null, markCount: number, stationCount: number): string {
	if (!expected) return 'With these marks there would be no fit';
	const { neverDecided, doubtful, withTolerance } = expected;
	const marks = stationCount > 1 ? `${counted(markCount, 'mark')}, ${stationCount} stations` : counted(markCount, 'mark');
	if (withTolerance === 0) return `${marks}: no tolerance is set yet to hold this against`;
	if (neverDecided > 0) return `${marks} and this instrument could never decide ${neverDecided} of ${counted(withTolerance, 'checkpoint')}`;
	if (doubtful > 0) return `${marks} and this instrument decide all but what lies near its limits`;
	return `${marks} and this instrument can decide all ${counted(withTolerance, 'checkpoint')}`;
}
