/** @vitest-environment jsdom */
import { ORPCError } from '@orpc/client';
import { cleanup, fireEvent, render, screen, waitFor } from '@testing-library/react';
import { MemoryRouter } from 'react-router-dom';
import { afterEach, describe, expect, it, vi } from 'vitest';
import { z } from 'zod';
import { Button } from '#src/ui/button.tsx';
import { NumberField, TextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';

afterEach(cleanup);
const schema = z.object({ name: z.string().min(1, 'Say something here.'), heightM: z.number(), sigmaMm: z.number().nullable() });

function shown(onSubmit: (values: z.infer<typeof schema>) => Promise<unknown>) {
	render(
		<Form schema={schema} values={{ name: '' }} onSubmit={onSubmit}>
			<TextField name="name" label="Name" />
			<NumberField name="heightM" label="Height" unit="m" />
			<NumberField name="sigmaMm" label="Sigma" unit="mm" isOptional />
			<Submit>Store</Submit>
		</Form>,
	);
	const type = (label: string, value: string) => fireEvent.change(screen.getByLabelText(label), { target: { value } });
	return { type, send: () => fireEvent.click(screen.getByRole('button', { name: 'Store' })) };
}
const typed = (label: string) => (screen.getByLabelText(label) as HTMLInputElement).value;

describe('a form', () => {
	it('sends nothing that its schema refuses, and says at each field what is wanted', async () => {
		const submit = vi.fn(async () => undefined);
		const { type, send } = shown(submit);
		type('Height', 'N/A');
		send();
		await waitFor(() =>
			expect(screen.getAllByRole('alert').map((alert) => alert.textContent)).toEqual(['Say something here.', 'Write a number, in m.']),
		);
		expect(submit).not.toHaveBeenCalled();
		expect(screen.getByLabelText('Height').getAttribute('aria-invalid')).toBe('true');
		expect(screen.getByLabelText('Height').getAttribute('aria-describedby')).toBe(screen.getAllByRole('alert')[1]?.id);
	});

	it('never sends an empty number as 0', async () => {
		const submit = vi.fn(async () => undefined);
		const { type, send } = shown(submit);
		type('Name', 'T7');
		type('Height', '−1,5');
		send();
		await waitFor(() => expect(submit).toHaveBeenCalledWith({ name: 'T7', heightM: -1.5, sigmaMm: null }));
	});

	it('keeps what was typed when the server refuses, and puts its word at the field it names', async () => {
		const { type, send } = shown(async () => {
			throw new ORPCError('REFUSED', { status: 422, message: 'There is a T7 already.', data: { code: 'taken', where: 'name' } });
		});
		type('Name', 'T7');
		type('Height', '2');
		send();
		expect((await screen.findByRole('alert')).textContent).toBe('There is a T7 already.');
		expect(document.activeElement).toBe(screen.getByLabelText('Name'));
		expect([typed('Name'), typed('Height')]).toEqual(['T7', '2']);
	});

	it('says above its button what belongs to no field', async () => {
		const { type, send } = shown(async () => {
			throw new TypeError('Failed to fetch');
		});
		type('Name', 'T7');
		type('Height', '2');
		send();
		expect((await screen.findByRole('alert')).textContent).toMatch(/not reached.*what you typed is kept/i);
		expect(typed('Name')).toBe('T7');
	});
});

describe('a button that cannot act', () => {
	it('stays, is reached by the keyboard, says why and does nothing', () => {
		const press = vi.fn();
		render(
			<MemoryRouter>
				<Button onClick={press} whyNot="The project engineer brings the model.">
					Bring in the model
				</Button>
			</MemoryRouter>,
		);
		const button = screen.getByRole('button', { name: 'Bring in the model' });
		button.focus();
		expect(document.activeElement).toBe(button);
		fireEvent.click(button);
		expect(press).not.toHaveBeenCalled();
		expect(document.getElementById(button.getAttribute('aria-describedby') ?? '')?.textContent).toBe(
			'The project engineer brings the model.',
		);
	});
});
