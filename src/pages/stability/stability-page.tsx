import { useSuspenseQueries } from '@tanstack/react-query';
import { useId, useMemo } from 'react';
import { Link, useParams } from 'react-router-dom';
import type { FitSummary } from '#shared/fit/contract.ts';
import { listed } from '#src/features/fit/cures.ts';
import { type StabilityTest, testStability } from '#src/features/fit/stability.ts';
import { StabilityTable } from '#src/features/fit/stability-table.tsx';
import { useAddressState } from '#src/lib/address-state.ts';
import { api } from '#src/lib/api.ts';
import { FieldFrame } from '#src/ui/field.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Strip } from '#src/ui/strip.tsx';

/** Between surveys: did any mark move between two adopted fits? */
export default function StabilityPage() {
	const { siteId = '' } = useParams();
	const [{ data: fits }, { data: surveys }] = useSuspenseQueries({
		queries: [api.fit.list.queryOptions({ input: { siteId } }), api.survey.list.queryOptions({ input: { siteId } })],
	});
	const surveyOf = new Map(surveys.map((survey) => [survey.surveyId, `survey ${survey.number} of ${survey.surveyedOn}`]));
	const [earlier, setEarlier] = useAddressState('before');
	const [later, setLater] = useAddressState('after');
	const adopted = fits.filter(({ state }) => state === 'adopted').sort((a, b) => b.number - a.number);
	const after = adopted.find(({ fitId }) => fitId === later) ?? adopted[0];
	const before =
		adopted.find(({ fitId }) => fitId === earlier) ?? adopted.find(({ surveyId }) => surveyId !== after?.surveyId) ?? adopted.at(-1);
	const strip = (
		<Strip
			items={[
				<Link key="control" to={`/sites/${siteId}/control`} className="underline underline-offset-3">
					control
				</Link>,
				before && after && `fit ${before.number} against fit ${after.number}`,
				'tested between the sightings, the datum taken out',
			]}
		/>
	);
	if (!before || !after || before.fitId === after.fitId)
		return (
			<>
				{strip}
				<Headline title="Marks between surveys">It takes two adopted fits to see whether a mark moved</Headline>
				<Notice kind="empty" title="Adopt the fit of a second set-up that sighted the same marks" />
			</>
		);
	return (
		<>
			{strip}
			<Compared siteId={siteId} before={before} after={after}>
				<div className="grid gap-3.5 tablet:grid-cols-2">
					<FitChoice label="Before" surveyOf={surveyOf} fits={adopted} value={before.fitId} onValue={setEarlier} />
					<FitChoice label="After" surveyOf={surveyOf} fits={adopted} value={after.fitId} onValue={setLater} />
				</div>
			</Compared>
		</>
	);
}

interface ComparedProps {
	siteId: string;
	before: FitSummary;
	after: FitSummary;
	children: React.ReactNode;
}

function Compared({ siteId, before, after, children }: ComparedProps) {
	const [{ data: one }, { data: other }] = useSuspenseQueries({
		queries: [
			api.fit.get.queryOptions({ input: { siteId, fitId: before.fitId } }),
			api.fit.get.queryOptions({ input: { siteId, fitId: after.fitId } }),
		],
	});
	const outcome = useMemo(() => testStability(one, other), [one, other]);
	return (
		<>
			<Headline title="Marks between surveys">{outcome.ok ? headlineOf(outcome.test) : 'These two cannot be compared'}</Headline>
			<div className="flex max-w-[60rem] flex-col gap-4">
				{children}
				{outcome.ok ? (
					<StabilityTable test={outcome.test} />
				) : (
					<Notice kind="wrong" title="Too little in common">
						{outcome.refusal.message}
					</Notice>
				)}
			</div>
		</>
	);
}

function headlineOf({ comparison, marks }: StabilityTest): string {
	if (comparison.congruent) return `No mark moved: ${marks.length} kept their places against each other`;
	const moved = marks.filter(({ isStable }) => isStable === false).map(({ name }) => name);
	if (moved.length === 0) return 'Marks moved against each other, and none can be named: no group of them agrees alone';
	return `${listed(moved)} moved; the other ${marks.length - moved.length} kept their places`;
}

interface FitChoiceProps {
	label: string;
	/** A survey in words, by its id. */
	surveyOf: ReadonlyMap<string, string>;
	fits: readonly FitSummary[];
	value: string;
	onValue: (fitId: string) => void;
}

function FitChoice({ label, surveyOf, fits, value, onValue }: FitChoiceProps) {
	const id = useId();
	return (
		<FieldFrame id={id} label={label}>
			<select
				id={id}
				value={value}
				onChange={(event) => onValue(event.currentTarget.value)}
				className="min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body text-ink pointer-coarse:min-h-12"
			>
				{fits.map((fit) => (
					<option key={fit.fitId} value={fit.fitId}>
						Fit {fit.number}, {surveyOf.get(fit.surveyId)}, set-up {fit.setupName}
					</option>
				))}
			</select>
		</FieldFrame>
	);
}
