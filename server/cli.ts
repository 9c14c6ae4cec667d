import { readFile } from 'node:fs/promises';
import { resolve } from 'node:path';
import { text } from 'node:stream/consumers';
import { runFit } from './cli/fit.ts';
import { runJudge } from './cli/judge.ts';

/** JSON on standard output, all else on standard error. 0 done · 2 the input is refused · 1 a defect of ours. */
interface Outcome {
	exitCode: number;
	output: unknown;
}

type Command = (args: readonly string[]) => Promise<Outcome> | Outcome;

const commands: Record<string, Command> = {
	fit: async (args) => onText(args, runFit),
	judge: async (args) => onText(args, runJudge),
};

async function onText(args: readonly string[], run: (text: string) => Outcome): Promise<Outcome> {
	const [file, ...more] = args;
	if (more.length > 0) return refused(`One file or none; there are ${args.length}.`);
	if (file === undefined) return run(await text(process.stdin));
	const read = await readFile(fromCaller(file), 'utf8').catch((error: NodeJS.ErrnoException) => error);
	return typeof read === 'string' ? run(read) : refused(`The file ${file} cannot be read: ${read.message}`);
}

/** The program runs in the checkout; files are named from where the person stands. */
function fromCaller(file: string): string {
	return resolve(process.env.BATTERBOARD_CALLED_FROM ?? '.', file);
}

function refused(message: string): Outcome {
	return { exitCode: 2, output: { error: { code: 'bad-input', message } } };
}

const [name = '', ...args] = process.argv.slice(2);
const command = Object.hasOwn(commands, name) ? commands[name] : undefined;
try {
	const known = Object.keys(commands).join(', ');
	const { exitCode, output } =
		command === undefined ? refused(`${name === '' ? 'No command' : `"${name}" is no command`}; there are ${known}.`) : await command(args);
	process.stdout.write(`${JSON.stringify(output)}\n`);
	process.exitCode = exitCode;
} catch (error) {
	console.error(error);
	process.exitCode = 1;
}
