import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useId, useState } from 'react';
import { plainText } from '#shared/base-contract.ts';
import type { RevisionSummary } from '#shared/model/contract.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { bytes } from '#src/lib/format.ts';
import { UploadFault, uploadFile } from '#src/lib/upload.ts';
import { Button } from '#src/ui/button.tsx';
import { ChoiceGroup } from '#src/ui/choice.tsx';
import { describedBy, FieldFrame } from '#src/ui/field.tsx';
import { FileDrop } from '#src/ui/file-drop.tsx';
import { Notice } from '#src/ui/notice.tsx';
import { Progress } from '#src/ui/progress.tsx';

interface ModelUploadProps {
	siteId: string;
	userId: string;
	models: readonly { modelId: string; name: string; revisions: readonly Pick<RevisionSummary, 'number'>[] }[];
	onBegun: (revisionId: string) => void;
}

const newModel = 'new';

/** An IFC file becomes the next revision of a model, or the first of a new one. What was sent of a broken upload is kept. */
export function ModelUpload({ siteId, userId, models, onBegun }: ModelUploadProps) {
	const nameId = useId();
	const [file, setFile] = useState<File | null>(null);
	const [modelId, setModelId] = useState(models[0]?.modelId ?? newModel);
	const [name, setName] = useState(models.length === 0 ? 'Structure' : '');
	const [sent, setSent] = useState<{ done: number; of: number } | null>(null);
	const [stop, setStop] = useState<AbortController | null>(null);
	const queries = useQueryClient();
	const send = useMutation({
		mutationFn: async (chosen: File) => {
			const controller = new AbortController();
			setStop(controller);
			const uploadId = await uploadFile({
				file: chosen,
				siteId,
				userId,
				purpose: 'model',
				signal: controller.signal,
				onProgress: (done, of) => setSent({ done, of }),
			});
			return client.model.read({ siteId, uploadId, model: modelId === newModel ? { newName: name } : { modelId } });
		},
		onSettled: () => {
			setSent(null);
			setStop(null);
		},
		onSuccess: async ({ revisionId }) => {
			setFile(null);
			await Promise.all([api.model.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
			onBegun(revisionId);
		},
	});
	const parsedName = plainText(60).safeParse(name);
	const nameError = modelId === newModel && !parsedName.success ? (parsedName.error.issues[0]?.message ?? null) : null;
	const wasStopped = send.error instanceof DOMException && send.error.name === 'AbortError';

	if (sent)
		return (
			<Progress doing={`Sending ${file?.name ?? 'the file'}`} done={sent.done} of={sent.of} amount={bytes} onCancel={() => stop?.abort()} />
		);
	return (
		<div className="flex flex-col gap-4">
			<FileDrop
				label="The model, an IFC file"
				hint="IFC2x3, IFC4 or IFC4x3 as .ifc, up to 400 MB"
				accept=".ifc"
				file={file}
				onFile={setFile}
				error={send.error && !wasStopped ? (send.error instanceof UploadFault ? send.error.message : refusalOf(send.error).message) : null}
			/>
			{wasStopped && (
				<Notice kind="note" title="Stopped">
					What was sent is kept: send the same file again to go on from there.
				</Notice>
			)}
			{file && (
				<>
					{models.length > 0 && (
						<ChoiceGroup
							legend="It is"
							isRow
							value={modelId}
							onChange={setModelId}
							options={[
								...models.map((model) => ({
									value: model.modelId,
									label: `the next revision of ${model.name}`,
									detail: `revision ${(model.revisions[0]?.number ?? 0) + 1}`,
								})),
								{ value: newModel, label: 'a model of its own', detail: 'steel, embeds …' },
							]}
						/>
					)}
					{modelId === newModel && (
						<FieldFrame id={nameId} label="Name of the model" hint="As people on site call it" error={nameError ?? undefined}>
							<input
								id={nameId}
								value={name}
								onChange={(event) => setName(event.currentTarget.value)}
								aria-describedby={describedBy(nameId, true, nameError)}
								className="min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 text-body text-ink pointer-coarse:min-h-12"
							/>
						</FieldFrame>
					)}
					<div>
						<Button weight="act" isBusy={send.isPending} whyNot={nameError} onClick={() => send.mutate(file)}>
							Send and read
						</Button>
					</div>
				</>
			)}
		</div>
	);
}
