/** What a command of the command line answers: exit code and what to print (text as it stands, anything else as JSON). */
export interface Answer {
	exitCode: number;
	output: unknown;
}

/** An input that is refused: thrown where it is found, answered as exit code 2 with nothing else printed. */
export class InputRefused extends Error {
	readonly code: string;
	readonly where: string | undefined;
	constructor(code: string, message: string, where?: string) {
		super(message);
		this.code = code;
		this.where = where;
	}

	get answer(): Answer {
		const { code, message, where } = this;
		return { exitCode: 2, output: { error: { code, message, ...(where === undefined ? {} : { where }) } } };
	}
}
