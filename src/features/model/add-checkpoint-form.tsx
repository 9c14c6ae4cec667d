import { useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { Vector3 } from '#shared/geometry/frame.ts';
import type { StoredElement } from '#shared/model/contract.ts';
import { api, client } from '#src/lib/api.ts';
import { metres } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface AddCheckpointFormProps {
	siteId: string;
	revisionId: string;
	element: StoredElement;
	/** Design frame, as picked. */
	place: Vector3;
	normal: Vector3;
	onAdded: (checkpointId: string) => void;
	onClose: () => void;
}

/** A checkpoint where a person pressed on the model: what it is called and why it is asked for. */
export function AddCheckpointForm({ siteId, revisionId, element, place, normal, onAdded, onClose }: AddCheckpointFormProps) {
	const queries = useQueryClient();
	const isLevel = Math.abs(normal[2]) > 0.9;
	return (
		<Dialog isOpen onClose={onClose} title={`A checkpoint on ${element.title}`}>
			<p className="mt-0">
				At {place.map((part) => metres(part)).join(', ')} m,{' '}
				{isLevel ? `for the level of this ${normal[2] > 0 ? 'top' : 'soffit'}` : 'along the normal of this face, outward as you look at it'}
				. It is asked for in later checks, and in later revisions as long as the element stands where it is.
			</p>
			<Form
				schema={z.object({ label: plainText(80), reason: plainText(400) })}
				values={{ label: '', reason: '' }}
				onSubmit={async ({ label, reason }) => {
					const input = {
						siteId,
						revisionId,
						elementId: element.elementId,
						place: [...place] as [number, number, number],
						normal: [...normal] as [number, number, number],
					};
					const { checkpointId } = await client.model.addCheckpoint({ ...input, label, reason });
					await queries.invalidateQueries({ queryKey: api.model.key() });
					onAdded(checkpointId);
				}}
			>
				<TextField name="label" label="Where, in words" hint="East face, at the door’s jamb" />
				<TextField name="reason" label="Why it is asked for" />
				<Submit beside={<Button onClick={onClose}>Not here</Button>}>Place it</Submit>
			</Form>
		</Dialog>
	);
}
