import { useMutation, useQueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import { api } from '#src/lib/api.ts';
import { Button } from '#src/ui/button.tsx';
import { SelectField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

const schema = z.object({ companyId: z.string(), name: plainText(80) });

interface CompanyFormProps {
	siteId: string;
	companies: readonly { companyId: string; name: string }[];
	onDone: () => void;
	onLeave: () => void;
}

/** Another firm, or another name for one. */
export function CompanyForm({ siteId, companies, onDone, onLeave }: CompanyFormProps) {
	const queries = useQueryClient();
	const settled = {
		onSuccess: async () => {
			await queries.invalidateQueries({ queryKey: api.site.key() });
			onDone();
		},
	};
	const add = useMutation(api.site.addCompany.mutationOptions(settled));
	const rename = useMutation(api.site.renameCompany.mutationOptions(settled));
	return (
		<Form
			schema={schema}
			values={{ companyId: '', name: '' }}
			onSubmit={({ companyId, name }): Promise<unknown> =>
				companyId === '' ? add.mutateAsync({ siteId, name }) : rename.mutateAsync({ siteId, companyId, name })
			}
			className="max-w-120"
		>
			<SelectField
				name="companyId"
				label="Company"
				options={[
					{ value: '', label: 'A new one' },
					...companies.map(({ companyId, name }) => ({ value: companyId, label: `Rename ${name}` })),
				]}
			/>
			<TextField name="name" label="Its name" autoComplete="organization" />
			<Submit beside={<Button onClick={onLeave}>Leave it</Button>}>Keep the name</Submit>
		</Form>
	);
}
