/** The refusals a command may throw. The guard turns them into the contract's typed errors; any other throw is a fault of ours. */

/** The input or the state does not allow it: REFUSED, with a code for programs and a sentence for the person. */
export class Refused extends Error {
	readonly code: string;
	readonly where: string | undefined;
	constructor(code: string, message: string, where?: string) {
		super(message);
		this.name = 'Refused';
		this.code = code;
		this.where = where;
	}
}

/** Somebody was quicker: an update that named the expected state met no row. CONFLICT. */
export class Conflict extends Error {
	constructor(message = 'Someone was quicker. Look again, then decide.') {
		super(message);
		this.name = 'Conflict';
	}
}

/** The member's role does not reach this far. FORBIDDEN. */
export class Forbidden extends Error {
	constructor(message = 'Your role on this site does not allow this.') {
		super(message);
		this.name = 'Forbidden';
	}
}

/** Not there, on another site, or not this person's to see: the same answer. NOT_FOUND. */
export class NotFound extends Error {
	constructor(message = 'There is no such thing here, or it is not yours to see.') {
		super(message);
		this.name = 'NotFound';
	}
}

/** The first row, or NOT_FOUND where there is none. */
export function foundOne<Row>(rows: readonly Row[]): Row {
	const [row] = rows;
	if (row === undefined) throw new NotFound();
	return row;
}
