import { ORPCError } from '@orpc/client';
import { describe, expect, it } from 'vitest';
import { faultOf } from '#src/app/fault-of.ts';
import { refusalOf } from '#src/lib/api-error.ts';
import { backOf } from '#src/pages/sign-in/back-of.ts';
import { numberOf } from '#src/ui/field.tsx';

describe('a refusal in words', () => {
	it('keeps the contract’s own message and the field it names', () => {
		const refused = new ORPCError('REFUSED', { status: 422, message: 'Row 14 is no number.', data: { code: 'x', where: 'name' } });
		expect(refusalOf(refused)).toEqual({ code: 'REFUSED', message: 'Row 14 is no number.', where: 'name' });
		const invalid = new ORPCError('BAD_REQUEST', {
			message: 'Input validation failed',
			data: { issues: [{ message: 'Say something here.', path: ['survey', 'name'] }] },
		});
		expect(refusalOf(invalid)).toEqual({ code: 'BAD_REQUEST', message: 'Say something here.', where: 'survey.name' });
	});

	it('names no field where the path of an issue is no list', () => {
		const odd = new ORPCError('BAD_REQUEST', {
			message: 'Invalid',
			data: { issues: [{ message: 'Not an id.', path: 'siteId' }, null, 7] },
		});
		expect(refusalOf(odd)).toEqual({ code: 'BAD_REQUEST', message: 'Not an id.', where: null });
	});

	it('tells no line from a fault of ours, and shows nobody a stack', () => {
		for (const text of ['Failed to fetch', 'NetworkError when attempting to fetch resource.', 'Load failed'])
			expect(refusalOf(new TypeError(text)).code).toBe('NO_LINE');
		for (const error of [
			new ORPCError('INTERNAL_SERVER_ERROR', { message: 'column "x" does not exist' }),
			new Error('secret'),
			'odd',
			null,
		]) {
			const { code, message } = refusalOf(error);
			expect(code).toBe('FAULT');
			expect(message).not.toMatch(/column|secret|odd/);
		}
	});
});

describe('a page that could not be shown', () => {
	it.each([
		['signed out', new ORPCError('UNAUTHORIZED'), 'signed-out'],
		['not there', new ORPCError('NOT_FOUND'), 'not-yours'],
		['not allowed', new ORPCError('FORBIDDEN'), 'not-yours'],
		['an id that is none', new ORPCError('BAD_REQUEST'), 'not-yours'],
		['code that is no longer served, Chromium', new TypeError('Failed to fetch dynamically imported module: /assets/a.js'), 'new-version'],
		['code that is no longer served, Firefox', new TypeError('error loading dynamically imported module'), 'new-version'],
		['code that is no longer served, Safari', new TypeError('Importing a module script failed.'), 'new-version'],
		['no line', new TypeError('Failed to fetch'), 'no-line'],
		['a fault', new Error('x is undefined'), 'wrong'],
	])('%s', (_, error, kind) => {
		expect(faultOf(error).kind).toBe(kind);
	});
});

describe('the way back after signing in', () => {
	it('stays in this program', () => {
		expect(backOf('/sites/1/checks/2?at=cp')).toBe('/sites/1/checks/2?at=cp');
		for (const outside of [
			null,
			'',
			'https://elsewhere.example',
			'//elsewhere.example',
			'/\\elsewhere.example',
			'javascript:alert(1)',
			'/sign-in?back=/sign-in',
		])
			expect(backOf(outside)).toBe('/sites');
	});
});

describe('a typed number', () => {
	it('takes comma, point and the real minus, and never turns nothing into 0', () => {
		expect(numberOf('−1,5', false)).toBe(-1.5);
		expect(numberOf(' 2.25 ', false)).toBe(2.25);
		expect(numberOf('', true)).toBeNull();
		expect(numberOf('', false)).toBeNaN();
		expect(numberOf('N/A', true)).toBeNaN();
		expect(numberOf(3, false)).toBe(3);
	});
});
