import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { Requirement } from '#shared/model/requirement.ts';
import { api, client } from '#src/lib/api.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface ChooseBarProps {
	siteId: string;
	revisionId: string;
	ids: readonly string[];
	onDone: () => void;
}

const usual = ['Cannot be seen from any set-up', 'Cast against other concrete', 'Covered by the next element before it is measured'];

/** What becomes of the ticked checkpoints: one act, one reason, for all of them. */
export function ChooseBar({ siteId, revisionId, ids, onDone }: ChooseBarProps) {
	const queries = useQueryClient();
	const [isAsking, setAsking] = useState(false);
	const [reason, setReason] = useState('');
	const choose = useMutation({
		mutationFn: ({ requirement, why }: { requirement: Requirement; why: string | null }) =>
			client.model.chooseCheckpoints({ siteId, revisionId, checkpointIds: [...ids], requirement, reason: why }),
		onSuccess: async () => {
			await queries.invalidateQueries({ queryKey: api.model.checkpoints.key() });
			setAsking(false);
			onDone();
		},
	});
	if (ids.length === 0) return null;
	return (
		<div role="status" className="sheet flex flex-wrap items-center gap-2.5 border-ink px-3 py-2">
			<span className="flex-1 basis-40 font-medium">{counted(ids.length, 'checkpoint')} ticked</span>
			<Button isBusy={choose.isPending} onClick={() => choose.mutate({ requirement: 'required', why: null })}>
				Require
			</Button>
			<Button isBusy={choose.isPending} onClick={() => choose.mutate({ requirement: 'by-sample', why: null })}>
				By sample
			</Button>
			<Button isBusy={choose.isPending} onClick={() => setAsking(true)}>
				Leave out …
			</Button>
			<Button weight="plain" onClick={onDone}>
				Untick
			</Button>
			{choose.error && !isAsking && (
				<p role="alert" className="m-0 basis-full font-medium">
					{refusalOf(choose.error).message}
				</p>
			)}
			<Dialog isOpen={isAsking} onClose={() => setAsking(false)} title={`Leave out ${counted(ids.length, 'checkpoint')}`}>
				<p className="mt-0">Later checks do not ask for them, and say so. Checks already made stay as they are.</p>
				<div className="mb-3 flex flex-wrap gap-2">
					{usual.map((one) => (
						<Button key={one} onClick={() => setReason(one)}>
							{one}
						</Button>
					))}
				</div>
				<Form
					key={reason}
					schema={z.object({ reason: plainText(400) })}
					values={{ reason }}
					onSubmit={({ reason: why }) => choose.mutateAsync({ requirement: 'left-out', why })}
				>
					<LongTextField name="reason" label="Why" hint="It stands on every check and on the pour’s record." />
					<Submit beside={<Button onClick={() => setAsking(false)}>Keep them</Button>}>Leave out</Submit>
				</Form>
			</Dialog>
		</div>
	);
}
