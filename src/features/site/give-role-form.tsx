import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { roles as allRoles, type Role } from '#shared/permissions.ts';
import type { SitePerson } from '#shared/site/people-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { SelectField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { roleWords } from './role-words.ts';

const schema = z.object({ userId: z.uuid('Choose a person.'), role: z.enum(allRoles), companyId: z.string() });

interface GiveRoleFormProps {
	siteId: string;
	people: readonly SitePerson[];
	roles: readonly Role[];
	companies: readonly { companyId: string; name: string }[];
	onGiven: () => void;
	onLeave: () => void;
}

/** A further role for somebody who is on the site; to change one, give the new and end the old. */
export function GiveRoleForm({ siteId, people, roles, companies, onGiven, onLeave }: GiveRoleFormProps) {
	const queries = useQueryClient();
	const give = useMutation(
		api.site.giveRole.mutationOptions({
			onSuccess: async () => {
				await queries.invalidateQueries({ queryKey: api.site.key() });
				onGiven();
			},
		}),
	);
	return (
		<Form
			schema={schema}
			values={{ userId: '', role: roles[0] ?? 'observer', companyId: companies[0]?.companyId ?? '' }}
			onSubmit={({ userId, role, companyId }) =>
				give.mutateAsync({ siteId, userId, role, companyId: role === 'contractor' && companyId !== '' ? companyId : null, isLead: false })
			}
			className="max-w-120"
		>
			<SelectField
				name="userId"
				label="Person"
				options={[{ value: '', label: 'Choose …' }, ...people.map(({ userId, name }) => ({ value: userId, label: name }))]}
			/>
			<SelectField name="role" label="Role" options={roles.map((role) => ({ value: role, label: roleWords([role]) }))} />
			{roles.includes('contractor') && companies.length > 0 && (
				<SelectField
					name="companyId"
					label="Company, for a contractor"
					options={companies.map(({ companyId, name }) => ({ value: companyId, label: name }))}
				/>
			)}
			<Submit
				next="It holds at once. To change a role, give the new one, then end the old."
				beside={<Button onClick={onLeave}>Leave it</Button>}
			>
				Give the role
			</Submit>
		</Form>
	);
}
