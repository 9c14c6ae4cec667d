import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface UnvoidDialogProps {
	siteId: string;
	setup: { setupId: string; name: string };
	onClose: () => void;
}

const fields = z.object({ reason: plainText(300) });

/** Counts a set-up's voided points again, with a reason. */
export function UnvoidDialog({ siteId, setup, onClose }: UnvoidDialogProps) {
	const restoring = useMutation(api.survey.unvoidPoints.mutationOptions());
	const refresh = useRefresh();
	return (
		<Dialog isOpen onClose={onClose} title={`Take back the voided points of set-up ${setup.name}?`}>
			<p className="mt-0">Later fits and checks count them again. Those made before stay as they are.</p>
			<Form
				schema={fields}
				values={{ reason: '' }}
				onSubmit={async ({ reason }) => {
					await restoring.mutateAsync({ siteId, setupId: setup.setupId, fromRow: 1, toRow: null, reason });
					await refresh();
					onClose();
				}}
			>
				<LongTextField name="reason" label="Reason" hint="Kept in the record." />
				<Submit beside={<Button onClick={onClose}>Leave them voided</Button>}>Take them back</Submit>
			</Form>
		</Dialog>
	);
}

function useRefresh(): () => Promise<unknown> {
	const queries = useQueryClient();
	return () => Promise.all([api.fit.key(), api.survey.key(), api.site.key()].map((queryKey) => queries.invalidateQueries({ queryKey })));
}
