import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField, NumberField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface VoidDialogProps {
	siteId: string;
	setup: { setupId: string; name: string };
	/** The last row that stays, where it is known. */
	afterRow: number;
	/** What speaks for it, as the reason that stands there at first. */
	reason: string;
	/** Its adopted fit, which stays as it was made. */
	hasAdoptedFit: boolean;
	onClose: () => void;
}

const fields = z.object({ afterRow: z.number().int().min(0), reason: plainText(300) });

/** Voids what a set-up measured after a row, with a reason that stays on each point. */
export function VoidDialog({ siteId, setup, afterRow, reason, hasAdoptedFit, onClose }: VoidDialogProps) {
	const voiding = useMutation(api.survey.voidPoints.mutationOptions());
	const refresh = useRefresh();
	return (
		<Dialog isOpen onClose={onClose} title={`Void what set-up ${setup.name} measured after a row?`}>
			<p className="mt-0">
				Later fits and checks pass over these points; they stay in the survey, marked, and can be taken back.
				{hasAdoptedFit && <b> The adopted fit and the checks made before stand on what they were made of: fit again, then check again.</b>}
			</p>
			<Form
				schema={fields}
				values={{ afterRow, reason }}
				onSubmit={async ({ afterRow: last, reason: why }) => {
					await voiding.mutateAsync({ siteId, setupId: setup.setupId, fromRow: last + 1, toRow: null, reason: why });
					await refresh();
					onClose();
				}}
				fieldOfCode={{ 'no-such-points': 'afterRow' }}
			>
				<NumberField
					name="afterRow"
					label="Last good row"
					unit="row of the file"
					hint="The end of the opening round, or the last sight of a target that still agreed. Later, if a knock was noted later."
				/>
				<LongTextField name="reason" label="Reason" hint="Kept on each point and in the record." />
				<Submit beside={<Button onClick={onClose}>Leave them</Button>}>Void them</Submit>
			</Form>
		</Dialog>
	);
}

function useRefresh(): () => Promise<unknown> {
	const queries = useQueryClient();
	return () => Promise.all([api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
}
