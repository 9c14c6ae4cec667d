import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { roles as allRoles, type Role } from '#shared/permissions.ts';
import { emailAddress } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { SelectField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { roleWords } from './role-words.ts';

const day = z.iso.date('Choose a day.');
const schema = z
	.object({ email: emailAddress, role: z.enum(allRoles), from: day, until: day })
	.refine(({ from, until }) => until >= from, { path: ['until'], message: 'The last day is before the first.' });

interface DeputyFormProps {
	siteId: string;
	roles: readonly Role[];
	onNamed: () => void;
	onLeave: () => void;
}

/** Somebody in one's own stead, for whole days by this device's clock. */
export function DeputyForm({ siteId, roles, onNamed, onLeave }: DeputyFormProps) {
	const queries = useQueryClient();
	const name = useMutation(
		api.site.nameDeputy.mutationOptions({
			onSuccess: async () => {
				await queries.invalidateQueries({ queryKey: api.site.people.key() });
				onNamed();
			},
		}),
	);
	return (
		<Form
			schema={schema}
			values={{ email: '', role: roles[0] ?? 'observer', from: '', until: '' }}
			onSubmit={({ email, role, from, until }) =>
				name.mutateAsync({ siteId, email, role, fromAt: new Date(`${from}T00:00`), untilAt: new Date(`${until}T23:59:59`) })
			}
			fieldOfCode={{ 'no-time': 'until' }}
			className="max-w-120"
		>
			<TextField name="email" type="email" label="E-mail address of your deputy" />
			<SelectField name="role" label="For your role" options={roles.map((role) => ({ value: role, label: roleWords([role]) }))} />
			<div className="grid grid-cols-2 gap-4">
				<TextField name="from" type="date" label="First day" />
				<TextField name="until" type="date" label="Last day" />
			</div>
			<Submit
				next="Acts in your role on those days, under the same separation, once the invitation is accepted."
				beside={<Button onClick={onLeave}>Leave it</Button>}
			>
				Name the deputy
			</Submit>
		</Form>
	);
}
