import { readFile } from 'node:fs/promises';
import { text } from 'node:stream/consumers';
import { runCheckCommand } from './cli/check.ts';
import { runCheckpoints } from './cli/checkpoints.ts';
import { runFit } from './cli/fit.ts';
import { runJudge } from './cli/judge.ts';
import { runVerify } from './cli/verify.ts';

/** JSON on standard output, or text as asked for (CSV); all else on standard error. 0 done · 2 the input is refused · 3 a record is not genuine · 1 a defect of ours. */
interface Outcome {
	exitCode: number;
	output: unknown;
}

type Command = (args: readonly string[]) => Promise<Outcome> | Outcome;

const commands: Record<string, Command> = {
	fit: async (args) => onText(args, runFit),
	judge: async (args) => onText(args, runJudge),
	check: (args) => runCheckCommand(args, (note) => console.error(note)),
	checkpoints: (args) => runCheckpoints(args, (note) => console.error(note)),
	verify: runVerify,
};

async function onText(args: readonly string[], run: (text: string) => Outcome): Promise<Outcome> {
	const [file, ...more] = args;
	if (more.length > 0) return refused(`One file or none; there are ${args.length}.`);
	if (file === undefined) return run(await text(process.stdin));
	const read = await readFile(file, 'utf8').catch((error: NodeJS.ErrnoException) => error);
	return typeof read === 'string' ? run(read) : refused(`The file ${file} cannot be read: ${read.message}`);
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
	process.stdout.write(typeof output === 'string' ? output : `${JSON.stringify(output)}\n`);
	process.exitCode = exitCode;
} catch (error) {
	console.error(error);
	process.exitCode = 1;
}
