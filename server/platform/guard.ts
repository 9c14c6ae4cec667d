import { implement, ORPCError, ValidationError } from '@orpc/server';
import { z } from 'zod';
import { siteInput } from '#shared/base-contract.ts';
import { contract } from '#shared/contract.ts';
import { mayWith, type Permission, type SitePermission } from '#shared/permissions.ts';
import { memberOf } from './membership.ts';
import type { Member, Platform, SignedIn } from './platform.ts';
import { Conflict, Forbidden, NotFound, Refused } from './refuse.ts';
import type { SessionOpening } from './session.ts';
import type { Tries } from './tries.ts';

/** The session of this request. What is set goes out with the answer as a cookie. */
export interface SessionDoor {
	start: (userId: string, opened?: SessionOpening) => Promise<void>;
	end: () => Promise<void>;
	/** What stands in the table for it; null without one. */
	id: string | null;
}

/** What a request brings, before anything was asked of it. */
export interface RequestContext {
	platform: Platform;
	signedIn: SignedIn | null;
	session: SessionDoor;
	/** The client's network address, for the limit on tries. */
	address: string;
	tries: Tries;
}

/**
 * The three kinds of routes. A route answers through the one its contract's permission names; through another it is a defect,
 * and one that names no permission is refused. The guard reads the raw input, so nobody learns from a fault in the input
 * whether a site exists.
 */
const answers = implement(contract).$context<RequestContext>();

const siteNamed = z.object(siteInput.shape);

/** For `public`: anybody. `signedIn` is null without a session. */
export const openRoutes = answers.use(async ({ context, next, procedure }) => {
	expectKind(procedure, 'public');
	return answering(() => next({ context }));
});

/** For `signed-in`: any person with a session. */
export const signedInRoutes = answers.use(async ({ context, next, procedure, errors }) => {
	expectKind(procedure, 'signed-in');
	const { signedIn } = context;
	if (signedIn === null) throw errors.UNAUTHORIZED();
	return answering(() => next({ context: { signedIn } }));
});

/** For all others: a member of the site in the input whose roles carry the permission. No site and not a member are the same answer. */
export const siteRoutes = answers.use(async ({ context, next, procedure, errors }, input) => {
	const permission = expectKind(procedure, 'site');
	const { signedIn, platform } = context;
	if (signedIn === null) throw errors.UNAUTHORIZED();
	// What else the input holds is the contract's to judge, after the person was let in.
	const site = siteNamed.safeParse(input);
	const member: Member | null = site.success ? await memberOf(platform.db, signedIn, site.data.siteId, platform.now()) : null;
	if (member === null) throw errors.NOT_FOUND();
	if (!mayWith(member.roles, permission)) throw errors.FORBIDDEN();
	return answering(() => next({ context: { member } }));
});

type Kind = 'public' | 'signed-in' | 'site';
type Guarded = { '~orpc': { meta: { permission?: Permission } } };

function expectKind(procedure: Guarded, kind: 'site'): SitePermission;
function expectKind(procedure: Guarded, kind: Kind): Permission;
function expectKind(procedure: Guarded, kind: Kind): Permission {
	const { permission } = procedure['~orpc'].meta;
	if (permission === undefined) throw new Error('This route names no permission.');
	const named: Kind = permission === 'public' || permission === 'signed-in' ? permission : 'site';
	if (named !== kind) throw new Error(`This route asks for ${permission} and is answered by the routes for ${kind}.`);
	return permission;
}

/** Turns a command's refusals, and a fault in the input, into what the contract says. */
async function answering<Answer>(work: () => PromiseLike<Answer> | Answer): Promise<Answer> {
	try {
		return await work();
	} catch (error) {
		throw asContractError(error);
	}
}

function asContractError(error: unknown): unknown {
	if (error instanceof Refused) {
		const data = error.where === undefined ? { code: error.code } : { code: error.code, where: error.where };
		return new ORPCError('REFUSED', { status: 422, message: error.message, data });
	}
	if (error instanceof Conflict) return new ORPCError('CONFLICT', { status: 409, message: error.message });
	if (error instanceof Forbidden) return new ORPCError('FORBIDDEN', { status: 403, message: error.message });
	if (error instanceof NotFound) return new ORPCError('NOT_FOUND', { status: 404, message: error.message });
	if (error instanceof ORPCError && error.code === 'BAD_REQUEST' && error.cause instanceof ValidationError) {
		// Only path and sentence: zod's own issues echo patterns and what was sent.
		const issues = error.cause.issues.map(({ path, message }) => ({ path: pathOf(path), message }));
		return new ORPCError('BAD_REQUEST', { status: 400, message: 'Some of this is not right.', data: { issues } });
	}
	return error;
}

function pathOf(path: ValidationError['issues'][number]['path']): string {
	return (path ?? []).map((step) => String(typeof step === 'object' ? step.key : step)).join('.');
}
