import { useState } from 'react';
import { deviationSentence } from '#shared/check/sentence.ts';
import type { BroughtPoints } from '#shared/flag/contract.ts';
import { client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { moment, signedMm } from '#src/lib/format.ts';
import { useNow } from '#src/lib/now.ts';
import { saveBlob } from '#src/lib/save-blob.ts';
import { UploadFault, uploadFile } from '#src/lib/upload.ts';
import { Button } from '#src/ui/button.tsx';
import { FileDrop } from '#src/ui/file-drop.tsx';
import { glyphKindOf, planTurnRad } from '#src/ui/glyph-kind.ts';
import { Notice } from '#src/ui/notice.tsx';
import { Rod, rodScaleMm } from '#src/ui/rod.tsx';

interface BroughtListProps {
	siteId: string;
	brought: readonly BroughtPoints[];
	timeZone: string;
	/** Surveys a site engineer may name; absent for all others. */
	surveys?: readonly { surveyId: string; number: number; name: string }[];
	onChanged: () => Promise<void>;
}

/** What a contractor brought, beside the flag's own figures and never in their place. */
export function BroughtList({ siteId, brought, timeZone, surveys, onChanged }: BroughtListProps) {
	const now = useNow();
	if (brought.length === 0) return null;
	return (
		<section aria-labelledby="brought-points">
			<h2 id="brought-points" className="m-0 mt-5 mb-2 text-h2 font-strong">
				Points the contractor brought
			</h2>
			<p className="m-0 mb-2 text-second">Shown beside the published measurement, never in its place.</p>
			<ul className="m-0 flex list-none flex-col gap-3 p-0">
				{brought.map((one) => (
					<li key={one.broughtId} className="sheet px-4 py-3">
						<p className="m-0">
							<b>{one.companyName}</b>: {one.fileName}
							<span className="block text-small text-second">
								{one.broughtBy}, {moment(one.broughtAt, timeZone, now)}
								{one.surveyNumber === null ? ' · not stored as a survey yet' : ` · stored as survey ${one.surveyNumber}`}
								{one.surveyNumber !== null && one.checkId === null && ', not checked yet'}
							</span>
						</p>
						<BroughtRods deviations={one.deviations} />
						<div className="mt-2 flex flex-wrap items-end gap-2.5">
							<Button
								onClick={async () => {
									saveBlob(await client.flag.broughtFile({ siteId, broughtId: one.broughtId }), one.fileName);
								}}
							>
								The file as brought
							</Button>
							{surveys && one.surveyId === null && (
								<NameSurvey siteId={siteId} broughtId={one.broughtId} surveys={surveys} onNamed={onChanged} />
							)}
						</div>
					</li>
				))}
			</ul>
		</section>
	);
}

function BroughtRods({ deviations }: Pick<BroughtPoints, 'deviations'>) {
	if (deviations.length === 0) return null;
	const scaleMm = rodScaleMm(
		deviations.map(({ limitsMm }) => limitsMm),
		deviations.map(({ deviationMm }) => deviationMm),
	);
	return (
		<ul className="m-0 mt-2 flex list-none flex-col border-t border-t-hair p-0 pt-1">
			{deviations.map((deviation) => (
				<li key={deviation.checkpointId} className="flex min-h-9 items-center gap-2">
					<span className="min-w-0 flex-1 text-small leading-tight text-second">{deviation.label}</span>
					<Rod
						deviationMm={deviation.deviationMm}
						limitsMm={deviation.limitsMm}
						expandedUncertaintyMm={deviation.expandedUncertaintyMm}
						scaleMm={scaleMm}
						glyph={glyphKindOf(deviation)}
						sentence={deviationSentence(deviation)}
						isPlan={deviation.characteristic === 'plan'}
						turnRad={planTurnRad(deviation.offsetMm)}
						widthPx={120}
					/>
					<b className="w-14 text-right">{signedMm(deviation.deviationMm, deviation.expandedUncertaintyMm)}</b>
				</li>
			))}
		</ul>
	);
}

function NameSurvey({
	siteId,
	broughtId,
	surveys,
	onNamed,
}: {
	siteId: string;
	broughtId: string;
	surveys: readonly { surveyId: string; number: number; name: string }[];
	onNamed: () => Promise<void>;
}) {
	const [surveyId, setSurveyId] = useState('');
	const [fault, setFault] = useState<string | null>(null);
	return (
		<>
			<label className="flex flex-col gap-1 font-medium">
				Stored as
				<select
					value={surveyId}
					onChange={(event) => setSurveyId(event.target.value)}
					className="min-h-11 rounded-corner border-[1.5px] border-field bg-sheet px-3 text-ink pointer-coarse:min-h-12"
				>
					<option value="">Choose the survey</option>
					{surveys.map((survey) => (
						<option key={survey.surveyId} value={survey.surveyId}>
							Survey {survey.number}, {survey.name}
						</option>
					))}
				</select>
			</label>
			<Button
				whyNot={surveyId === '' ? 'Store the file as a survey first, then choose it here.' : null}
				onClick={async () => {
					try {
						await client.flag.storePoints({ siteId, broughtId, surveyId });
						await onNamed();
					} catch (error) {
						setFault(refusalOf(error).message);
					}
				}}
			>
				Show it beside
			</Button>
			{fault && <Notice kind="wrong" title={fault} />}
		</>
	);
}

/** Where a contractor brings a list of points of its own to a flag. */
export function BringPoints({
	siteId,
	flagId,
	userId,
	onBrought,
}: {
	siteId: string;
	flagId: string;
	userId: string;
	onBrought: () => Promise<void>;
}) {
	const [file, setFile] = useState<File | null>(null);
	const [fault, setFault] = useState<string | null>(null);
	const bring = async (chosen: File): Promise<void> => {
		setFile(chosen);
		setFault(null);
		try {
			const uploadId = await uploadFile({ file: chosen, siteId, userId, purpose: 'own-points' });
			await client.flag.bringPoints({ siteId, flagId, uploadId });
			await onBrought();
		} catch (error) {
			setFault(error instanceof UploadFault ? error.message : refusalOf(error).message);
		}
	};
	return (
		<FileDrop
			label="Points of your own"
			hint="A list of names and coordinates with the targets. The site engineer fits and checks it like any other survey; it is shown beside."
			accept=".csv,.txt,.pts,.asc"
			file={file}
			onFile={(chosen) => void bring(chosen)}
			error={fault}
		/>
	);
}
