import { useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { api, client } from '#src/lib/api.ts';
import { metres } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

interface NameAxisFormProps {
	siteId: string;
	modelId: string;
	/** Plan, design frame, as picked. */
	from: readonly [number, number];
	to: readonly [number, number];
	onNamed: () => void;
	onClose: () => void;
}

/** What the axis through two picked points is called. */
export function NameAxisForm({ siteId, modelId, from, to, onNamed, onClose }: NameAxisFormProps) {
	const queries = useQueryClient();
	return (
		<Dialog isOpen onClose={onClose} title="An axis through two points">
			<p className="mt-0">
				Through {metres(from[0])}, {metres(from[1])} m and {metres(to[0])}, {metres(to[1])} m. With axes of two directions, the next reading
				names elements by them: C/3.
			</p>
			<Form
				schema={z.object({
					tag: z
						.string()
						.trim()
						.regex(/^[\p{L}\p{N}]{1,3}\p{L}?$/u, 'One to four letters or figures: C, 12, C2.'),
				})}
				values={{ tag: '' }}
				onSubmit={async ({ tag }) => {
					await client.model.nameAxis({ siteId, modelId, tag, from: [...from], to: [...to] });
					await queries.invalidateQueries({ queryKey: api.model.saidOfReading.key() });
					onNamed();
				}}
			>
				<TextField name="tag" label="The axis is called" hint="C, 3, C2" isMono />
				<Submit beside={<Button onClick={onClose}>Pick anew</Button>}>Name it</Submit>
			</Form>
		</Dialog>
	);
}
