import { type ReactNode, useMemo, useState } from 'react';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { RecordedCheckpoint, ShownPour } from '#shared/record/sealed-record.ts';
import { counted } from '#src/lib/format.ts';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';

interface ShownPourProps {
	shown: ShownPour;
	/** Times in the site's words. */
	at: (iso: string) => string;
}

/** All that is signed of a pour, whole: first what decides, then everything it rests on. The same where it is signed, kept and verified. */
export function ShownPourView({ shown, at }: ShownPourProps) {
	const { pour, checkpoints, leftOut, flags, checks, elements } = shown;
	const concessions = flags.flatMap(({ concession, ...flag }) => (concession === null ? [] : [{ ...flag, concession }]));
	return (
		<div className="flex flex-col gap-5">
			<Part title={shown.isReady ? 'Ready' : 'Not ready'}>
				<Sentences sentences={shown.readiness} />
				{shown.carriedOver.length > 0 && <Sentences sentences={shown.carriedOver} />}
			</Part>
			<Part title={`${counted(elements.length, 'element')} of ${pour.company}`}>
				<p className="m-0">
					{elements.map(({ mark, title, company }) => `${title || mark}${company === null ? '' : ` (${company})`}`).join(', ')}
				</p>
			</Part>
			{concessions.length > 0 && (
				<Part title={counted(concessions.length, 'concession')}>
					<Sentences
						sentences={concessions.map(
							({ mark, concession: { upToMm, reason, conditions, decidedBy, consentBy } }) =>
								`${mark}: up to ${upToMm} mm. ${reason}${conditions === null ? '' : ` On condition: ${conditions}`} ${[decidedBy, consentBy].filter(Boolean).join(', with the consent of ')}`,
						)}
					/>
				</Part>
			)}
			{flags.length > concessions.length && (
				<Part title="Flags">
					<Sentences sentences={flags.filter(({ concession }) => concession === null).map(({ mark, outcome }) => `${mark}: ${outcome}`)} />
				</Part>
			)}
			{shown.afterConcrete !== undefined && (
				<Part title={`${counted(shown.afterConcrete.length, 'point')} measured after the concrete`}>
					<Sentences sentences={shown.afterConcrete.map(({ label }) => label)} />
				</Part>
			)}
			{leftOut.length > 0 && (
				<Part title={`${counted(leftOut.length, 'point')} left out`}>
					<Sentences sentences={leftOutSentences(leftOut)} />
				</Part>
			)}
			{pour.list.length > 0 && (
				<Part title="Hold-point list">
					<Sentences sentences={pour.list.map(({ question, answer }) => `${question} ${answer ?? 'not answered'}`)} />
				</Part>
			)}
			{pour.witnessed.length > 0 && (
				<Part title="Witness points">
					<Sentences
						sentences={pour.witnessed.map(
							({ what, at: when, came, note }) =>
								`${what}, ${at(when)}: ${came === null ? 'not said whether anybody came' : came ? 'came' : 'did not come'}${note === null ? '' : `. ${note}`}`,
						)}
					/>
				</Part>
			)}
			<Part title={`${counted(checkpoints.length, 'point')}, each with its figures`}>
				<Points checkpoints={checkpoints} />
			</Part>
			<Part title="What it rests on">
				{checks.map((check) => (
					<div key={check.number} className="mb-3">
						<p className="m-0">
							<b>Check {check.number}</b>
							{check.publishedBy && `, published by ${check.publishedBy}`}
							{check.publishedAt && ` ${at(check.publishedAt)}`}: survey {check.survey.number}, {check.survey.name}, of{' '}
							{check.survey.surveyedOn} by {check.survey.observer}, against {check.model.name} rev {check.model.revision}, by{' '}
							{check.sheet.name} rev {check.sheet.revision} ({check.sheet.decision})
							{check.sheet.issueReason &&
								`. Issued ${check.sheet.issuedBy ? `by ${check.sheet.issuedBy} ` : ''}because: ${check.sheet.issueReason}`}
						</p>
						<Sentences
							sentences={[
								...check.fits.map(
									(fit) =>
										`Fit ${fit.number} of ${fit.setup}: prepared by ${fit.preparedBy}, adopted by ${fit.adoptedBy}, ${fit.checkedBy === null ? 'not checked by a second person' : `checked by ${fit.checkedBy}`}.${fit.surveyorInCharge === null ? '' : ` Surveyor in charge: ${fit.surveyorInCharge.name}, ${fit.surveyorInCharge.licence}, ${fit.surveyorInCharge.jurisdiction}.`}`,
								),
								...check.findings.map(({ message }) => message),
							]}
						/>
					</div>
				))}
				{!shown.isFitCheckedBySecond && <p className="m-0">This site asks for no second person’s check of a fit.</p>}
			</Part>
		</div>
	);
}

/** A part of a record with its heading. */
export function Part({ title, children }: { title: string; children: ReactNode }) {
	return (
		<section>
			<h3 className="m-0 mb-1 text-lead font-strong">{title}</h3>
			{children}
		</section>
	);
}

/** Sentences one below the other; very many are folded after the first. */
export function Sentences({ sentences }: { sentences: readonly string[] }) {
	const [isWhole, setIsWhole] = useState(false);
	const first = 12;
	const once = [...new Set(sentences)];
	const shown = isWhole ? once : once.slice(0, first);
	return (
		<>
			<ul className="m-0 flex list-none flex-col gap-0.5 p-0">
				{shown.map((sentence) => (
					<li key={sentence} className="max-w-[80ch]">
						{sentence}
					</li>
				))}
			</ul>
			{once.length > shown.length && <More count={once.length - shown.length} onPress={() => setIsWhole(true)} />}
		</>
	);
}

function More({ count, onPress }: { count: number; onPress: () => void }) {
	return (
		<button type="button" onClick={onPress} className="min-h-11 text-action underline underline-offset-3 pointer-coarse:min-h-12">
			{count} more
		</button>
	);
}

function Points({ checkpoints }: { checkpoints: readonly RecordedCheckpoint[] }) {
	const [isWhole, setIsWhole] = useState(false);
	const first = 20;
	// What is off comes first: a release of many points is read by its few.
	const sorted = useMemo(
		() => [...checkpoints].sort((a, b) => Number(a.verdict === 'within') - Number(b.verdict === 'within')),
		[checkpoints],
	);
	const scaleMm = useMemo(
		() =>
			rodScaleMm(
				checkpoints.map(({ limitsMm }) => limitsMm),
				checkpoints.map(({ deviationMm }) => deviationMm),
			),
		[checkpoints],
	);
	const shown = isWhole ? sorted : sorted.slice(0, first);
	return (
		<>
			<ul className="m-0 list-none p-0">
				{shown.map((point) => (
					<PointRow key={`${point.modelId} ${point.checkpointId}`} point={point} scaleMm={scaleMm} />
				))}
			</ul>
			{sorted.length > shown.length && <More count={sorted.length - shown.length} onPress={() => setIsWhole(true)} />}
		</>
	);
}

function PointRow({ point, scaleMm }: { point: RecordedCheckpoint; scaleMm: number }) {
	const sentence = deviationSentence(point);
	return (
		<li className="flex flex-wrap items-center gap-x-4 border-b border-hair py-1">
			<Rod
				deviationMm={point.deviationMm}
				limitsMm={point.limitsMm}
				expandedUncertaintyMm={point.expandedUncertaintyMm}
				scaleMm={scaleMm}
				glyph={glyphKindOf(point)}
				sentence={sentence}
				isPlan={point.characteristic === 'plan'}
				turnRad={planTurnRad(point.offsetMm)}
				widthPx={140}
			/>
			<span className="min-w-0 flex-1 basis-64 text-strip">{sentence}</span>
		</li>
	);
}

function leftOutSentences(leftOut: ShownPour['leftOut']): string[] {
	return leftOutByReason(leftOut).map(
		({ reason, by, labels }) => `${counted(labels.length, 'point')}: ${reason} (${by}). ${labels.join(', ')}`,
	);
}

/** What was left out for the same reason by the same person, together. */
export function leftOutByReason(leftOut: ShownPour['leftOut']): { reason: string; by: string; labels: string[] }[] {
	const groups = new Map<string, { reason: string; by: string; labels: string[] }>();
	for (const { reason, by, label } of leftOut) {
		const key = `${reason}\n${by}`;
		const group = groups.get(key);
		if (group === undefined) groups.set(key, { reason, by, labels: [label] });
		else group.labels.push(label);
	}
	return [...groups.values()];
}
