import { type FitKind, fitKinds } from '#shared/fit/fit-schema.ts';
import { type LengthUnit, lengthUnits } from '#shared/survey/point-table-schema.ts';
import { type Stage, stages } from '#shared/tolerance/sheet-schema.ts';
import { InputRefused } from './refusal.ts';

/** What `check` is asked for on the command line. */
export interface CheckArguments {
	readonly model: string;
	readonly targets: string;
	readonly control: string;
	readonly tolerances: string;
	readonly points: string | null;
	readonly fit: FitKind;
	readonly controlFrame: 'design' | 'map';
	readonly stage: Stage;
	/** The part of u that a set-up's points share. */
	readonly commonMm: number;
	/** Of all three CSV files, for coordinates and their σ. */
	readonly unit: LengthUnit;
}

const files = ['--targets', '--control', '--tolerances', '--points'] as const;
const options = [...files, '--fit', '--control-frame', '--stage', '--common-mm', '--csv-unit', '--scan'] as const;
type Option = (typeof options)[number];

function oneOf<Value extends string>(given: string | undefined, known: readonly Value[], fallback: Value, option: Option): Value {
	if (given === undefined) return fallback;
	const found = known.find((value) => value === given);
	if (found === undefined) throw new InputRefused('bad-input', `${option} is one of ${known.join(', ')}; not "${given}".`, option);
	return found;
}

function commonOf(given: string | undefined): number {
	if (given === undefined) return 2;
	if (/^[+-]?(nan|inf(inity)?)$/i.test(given)) throw new InputRefused('not-finite', '--common-mm is not a finite number.', '--common-mm');
	const commonMm = /^\d+(\.\d+)?([eE][+-]?\d+)?$/.test(given) ? Number(given) : Number.NaN;
	if (!(commonMm <= 1e6)) throw new InputRefused('bad-input', '--common-mm is a number of millimetres, 0 or more.', '--common-mm');
	return commonMm;
}

/**
 * Reads `check MODEL.ifc --targets … --control … --tolerances … [--points …] …`; `--option value` and `--option=value` alike.
 * @throws InputRefused for what is missing, unknown, given twice, or no value of its option; and for `--scan`
 */
export function readCheckArguments(args: readonly string[]): CheckArguments {
	const given = new Map<Option, string>();
	const models: string[] = [];
	for (let at = 0; at < args.length; at++) {
		const arg = args[at]!;
		if (!arg.startsWith('--')) {
			models.push(arg);
			continue;
		}
		const [name, ...rest] = arg.split('=');
		const option = options.find((known) => known === name);
		if (option === undefined) throw new InputRefused('bad-input', `There is no option ${name}. Known: ${options.join(', ')}.`, name);
		if (option === '--scan') {
			throw new InputRefused(
				'bad-input',
				'--scan cannot be used: scans come later. Give the measured points as CSV with --points.',
				option,
			);
		}
		const value = rest.length > 0 ? rest.join('=') : args[++at];
		if (value === undefined || value === '' || (rest.length === 0 && value.startsWith('--')))
			throw new InputRefused('bad-input', `${option} needs a value.`, option);
		if (given.has(option)) throw new InputRefused('bad-input', `${option} is given twice.`, option);
		given.set(option, value);
	}
	const [model, ...others] = models;
	if (model === undefined) throw new InputRefused('bad-input', 'Name the model: check MODEL.ifc --targets … --control … --tolerances …');
	if (others.length > 0) throw new InputRefused('bad-input', `One model at a time: ${others[0]} is one too many.`, others[0]);
	const needed = (option: Option): string => {
		const value = given.get(option);
		if (value === undefined) throw new InputRefused('bad-input', `${option} is missing.`, option);
		return value;
	};
	return {
		model,
		targets: needed('--targets'),
		control: needed('--control'),
		tolerances: needed('--tolerances'),
		points: given.get('--points') ?? null,
		fit: oneOf(given.get('--fit'), fitKinds, 'free', '--fit'),
		controlFrame: oneOf(given.get('--control-frame'), ['design', 'map'], 'design', '--control-frame'),
		stage: oneOf(given.get('--stage'), stages, 'as-cast', '--stage'),
		commonMm: commonOf(given.get('--common-mm')),
		unit: oneOf(given.get('--csv-unit'), lengthUnits, 'm', '--csv-unit'),
	};
}
