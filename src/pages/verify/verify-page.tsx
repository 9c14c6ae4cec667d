import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { readPublicKeys } from '#shared/record/public-key.ts';
import { type RecordFile, readRecordFile } from '#shared/record/read-record-file.ts';
import { type Verification, verifyRecords } from '#shared/record/verify-records.ts';
import { RecordView } from '#src/features/record/record-view.tsx';
import { Sentences } from '#src/features/record/shown-pour.tsx';
import { api } from '#src/lib/api.ts';
import { isoMoment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { FieldFrame } from '#src/ui/field.tsx';
import { FileDrop } from '#src/ui/file-drop.tsx';
import { Headline } from '#src/ui/headline.tsx';
import { Mark } from '#src/ui/mark.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { ChosenKeys, type KeyChoice } from './chosen-keys.tsx';

interface Outcome {
	verification: Verification;
	file: Exclude<RecordFile, { kind: 'other' }>;
}

/** No record is longer than this; a file that is would only stop the browser. */
const largestBytes = 200_000_000;

/** Is a record genuine? All of it is computed here, in the browser: no sign-in, and nothing of the record is sent anywhere. */
export default function VerifyPage() {
	const [file, setFile] = useState<File | null>(null);
	const [keys, setKeys] = useState<readonly KeyChoice[]>([]);
	const [head, setHead] = useState('');
	const [outcome, setOutcome] = useState<Outcome | null>(null);
	const [fault, setFault] = useState<string | null>(null);
	const [isBusy, setIsBusy] = useState(false);
	// The server's own word, and only offered: it proves nothing until somebody knows the key from elsewhere.
	const published = useQuery(api.record.keys.queryOptions({ retry: false }));
	const cleanHead = head.replaceAll(/\s/g, '').toLowerCase();
	const headFault = cleanHead === '' || /^[0-9a-f]{64}$/.test(cleanHead) ? null : 'A head is 64 digits and letters a to f.';
	const verify = async () => {
		if (file === null) return;
		setIsBusy(true);
		setFault(null);
		setOutcome(null);
		try {
			if (file.size > largestBytes) throw new Error('This file is too large to be a record.');
			const read = readRecordFile(new Uint8Array(await file.arrayBuffer()));
			if (read.kind === 'other') throw new Error(read.message);
			const chosen = (await Promise.all(keys.map(({ pem }) => readPublicKeys(pem)))).flat();
			setOutcome({ file: read, verification: await verifyRecords(read, { keys: chosen, head: cleanHead === '' ? null : cleanHead }) });
		} catch (error) {
			setFault(error instanceof Error ? error.message : 'The file cannot be read.');
		} finally {
			setIsBusy(false);
		}
	};
	const whyNot = !file ? 'Choose the record first.' : keys.length === 0 ? 'Choose whose signature counts.' : headFault;
	const change =
		<Value,>(set: (value: Value) => void) =>
		(value: Value) => {
			set(value);
			setOutcome(null);
			setFault(null);
		};
	return (
		<div className="mx-auto flex min-h-dvh w-full max-w-[58rem] flex-col px-4 pt-6 pb-28 tablet:pb-10">
			<header className="mb-5 flex items-center gap-2.5 text-lead font-heavy tracking-[-0.01em]">
				<Mark sizePx={32} />
				Batterboard
			</header>
			<main className="flex flex-col gap-5">
				<Headline title="Verify a record">{headlineOf(outcome)}</Headline>
				{outcome === null && (
					<p className="m-0 max-w-[70ch] text-second">
						Bring a record or a whole chain as it was downloaded. Signature, order and every verdict are worked out anew on this device; the
						file goes nowhere.
					</p>
				)}
				{fault !== null && (
					<Notice kind="wrong" title={fault}>
						Nothing was found out about it. Bring the file as it was downloaded.
					</Notice>
				)}
				{outcome !== null && <OutcomeView outcome={outcome} />}
				<FileDrop
					label="The record or the chain"
					hint="A .json file"
					accept=".json,application/json"
					file={file}
					onFile={change(setFile)}
				/>
				<ChosenKeys chosen={keys} onChange={change(setKeys)} published={published.data ?? null} isWithoutServer={published.isError} />
				<FieldFrame
					id="head"
					label="A head held from earlier"
					hint="Out of an old mail or report, if you have one: it shows whether the chain was written anew since. May stay empty."
					error={headFault ?? undefined}
				>
					<input
						id="head"
						value={head}
						spellCheck={false}
						autoComplete="off"
						onChange={(event) => change(setHead)(event.target.value)}
						className="block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 py-1.5 font-mono text-ink pointer-coarse:min-h-12"
					/>
				</FieldFrame>
				<div>
					<Button weight="act" isBusy={isBusy} whyNot={whyNot} onClick={verify}>
						Verify
					</Button>
				</div>
			</main>
		</div>
	);
}

function headlineOf(outcome: Outcome | null): string {
	if (outcome === null) return 'Is this record genuine?';
	const { genuine } = outcome.verification;
	const what = outcome.file.kind === 'chain' ? 'chain' : 'record';
	return genuine ? `This ${what} is genuine` : `This ${what} is not genuine`;
}

function OutcomeView({ outcome: { verification, file } }: { outcome: Outcome }) {
	const { genuine, reasons, head } = verification;
	const newest = file.kind === 'broken' ? undefined : file.records.at(-1);
	return (
		<>
			<Notice kind={genuine ? 'note' : 'wrong'} title={genuine ? 'What was found' : 'What is wrong'}>
				<div className="text-ink">
					<Sentences sentences={reasons} />
				</div>
			</Notice>
			{genuine && newest !== undefined && head !== null && (
				<RecordView
					body={newest.body}
					sha256={head}
					at={(iso) => `${isoMoment(new Date(iso), newest.body.site.timeZone)} (${newest.body.site.timeZone})`}
				/>
			)}
		</>
	);
}
