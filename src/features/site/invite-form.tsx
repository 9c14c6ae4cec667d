import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useFormContext, useWatch } from 'react-hook-form';
import { z } from 'zod';
import type { Role } from '#shared/permissions.ts';
import { emailAddress, invitedRoles } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { SelectField, TextField, TickField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { roleWords } from './role-words.ts';

const schema = z
	.object({ email: emailAddress, role: invitedRoles, companyId: z.string(), isLead: z.boolean() })
	.refine(({ role, companyId }) => role !== 'contractor' || companyId !== '', { path: ['companyId'], message: 'Say for which company.' });

interface InviteFormProps {
	siteId: string;
	roles: readonly Role[];
	companies: readonly { companyId: string; name: string }[];
	onInvited: () => void;
	onLeave: () => void;
}

/** By e-mail, with a role and a firm. */
export function InviteForm({ siteId, roles, companies, onInvited, onLeave }: InviteFormProps) {
	const queries = useQueryClient();
	const invite = useMutation(
		api.site.invite.mutationOptions({
			onSuccess: async () => {
				await queries.invalidateQueries({ queryKey: api.site.people.key() });
				onInvited();
			},
		}),
	);
	const options = [
		...roles.map((role) => ({ value: role, label: roleWords([role]) })),
		...(roles.includes('site-engineer') && roles.includes('project-engineer')
			? [{ value: 'both-engineers', label: roleWords(['site-engineer', 'project-engineer']) }]
			: []),
	];
	const first = roles[0] ?? 'observer';
	return (
		<Form
			schema={schema}
			values={{ email: '', role: first, companyId: companies.length === 1 ? (companies[0]?.companyId ?? '') : '', isLead: false }}
			onSubmit={({ companyId, isLead, role, ...rest }) =>
				invite.mutateAsync({
					siteId,
					...rest,
					role,
					companyId: role === 'contractor' ? companyId : null,
					isLead: role === 'contractor' && isLead,
				})
			}
			className="max-w-120"
		>
			<TextField name="email" type="email" label="E-mail address" />
			<SelectField name="role" label="Role on this site" options={options} />
			<CompanyPart companies={companies} />
			<Submit
				next="The mail names you, the site and the role. Its link holds for 14 days and for one use."
				beside={<Button onClick={onLeave}>Leave it</Button>}
			>
				Send the invitation
			</Submit>
		</Form>
	);
}

function CompanyPart({ companies }: Pick<InviteFormProps, 'companies'>) {
	const { control } = useFormContext();
	const role: unknown = useWatch({ control, name: 'role' });
	if (role !== 'contractor') return null;
	return (
		<>
			<SelectField
				name="companyId"
				label="Company"
				options={[
					...(companies.length === 1 ? [] : [{ value: '', label: 'Choose …' }]),
					...companies.map(({ companyId, name }) => ({ value: companyId, label: name })),
				]}
			/>
			<TickField name="isLead" label="Leads the company’s people: invites them and ends their roles" />
		</>
	);
}
