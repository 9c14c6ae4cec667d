import { type FitInput, type FitPair, type FitRefusal, type FitRefusalCode, fitKinds } from './fit-schema.ts';
import { isLevelled, isScaled } from './least-pairs.ts';

type Read = { ok: true; input: FitInput } | { ok: false; refusal: FitRefusal };
type Fields = Record<string, unknown>;

/** Beyond this, squares of squares overflow. */
const LARGEST = 1e60;
/** A standard deviation under this would overflow as a weight. */
const LEAST_SIGMA = 1e-60;

class Refused extends Error {
	readonly refusal: FitRefusal;
	constructor(code: FitRefusalCode, message: string, where?: string) {
		super(message);
		this.refusal = where === undefined ? { code, message } : { code, message, where };
	}
}

/**
 * Reads what a fit asks for from JSON that anyone may have written. `where` of a refusal is a path such as `pairs[2].control[0]`.
 *
 * Refuses: bad-input, not-finite (also "NaN" as text, null where a number must be, 1e999), duplicate-name, bad-sigma. Whether the pairs determine
 * the fit is for computeFit. null is allowed for a coordinate that is not known: plan of any side in a height fit; plan or level of a control point in a levelled one.
 */
export function readFitInput(value: unknown): Read {
	try {
		return { ok: true, input: readInput(value) };
	} catch (error) {
		if (error instanceof Refused) return { ok: false, refusal: error.refusal };
		throw error;
	}
}

function readInput(value: unknown): FitInput {
	const fields = readObject(value, 'the input');
	const kind = fitKinds.find((known) => known === fields.fit);
	if (!kind) throw new Refused('bad-input', `"fit" must be one of ${fitKinds.join(', ')}.`, 'fit');
	const input: FitInput = { fit: kind, pairs: [] };
	if (fields.knownScale !== undefined) {
		input.knownScale = readPositive(fields.knownScale, 'knownScale');
		if (isScaled(kind) && input.knownScale !== 1) {
			throw new Refused('bad-input', 'A known scale and a fit that estimates the scale exclude each other.', 'knownScale');
		}
	}
	if (fields.confidence !== undefined) {
		input.confidence = readPositive(fields.confidence, 'confidence');
		if (input.confidence >= 1) throw new Refused('bad-input', '"confidence" must be between 0 and 1.', 'confidence');
	}
	if (fields.station !== undefined) input.station = readVector(fields.station, 'station');
	if (!Array.isArray(fields.pairs)) throw new Refused('bad-input', '"pairs" must be a list.', 'pairs');
	input.pairs = fields.pairs.map((pair, i) => readPair(pair, `pairs[${i}]`, kind));
	refuseTwice(input.pairs, 'pairs');
	refuseSigmas(input.pairs);
	if (fields.carry !== undefined) {
		if (!Array.isArray(fields.carry)) throw new Refused('bad-input', '"carry" must be a list.', 'carry');
		input.carry = fields.carry.map((point, i) => {
			const where = `carry[${i}]`;
			const own = readObject(point, where);
			const read = { name: readName(own.name, `${where}.name`), survey: readVector(own.survey, `${where}.survey`) };
			return own.surveySigma === undefined ? read : { ...read, surveySigma: readSigma(own.surveySigma, `${where}.surveySigma`) };
		});
		refuseTwice(input.carry, 'carry');
	}
	return input;
}

function readPair(value: unknown, where: string, kind: FitInput['fit']): FitPair {
	const fields = readObject(value, where);
	const pair: FitPair = {
		name: readName(fields.name, `${where}.name`),
		survey: readPartial(fields.survey, `${where}.survey`, kind === 'height' ? 'plan' : 'none'),
		control: readPartial(fields.control, `${where}.control`, kind === 'height' ? 'plan' : isLevelled(kind) ? 'either' : 'none'),
	};
	if (fields.weight !== undefined) pair.weight = readPositive(fields.weight, `${where}.weight`);
	if (fields.surveySigma !== undefined) pair.surveySigma = readSigma(fields.surveySigma, `${where}.surveySigma`);
	if (fields.controlSigma !== undefined) pair.controlSigma = readSigma(fields.controlSigma, `${where}.controlSigma`);
	if (fields.heldBack !== undefined) {
		if (typeof fields.heldBack !== 'boolean') throw new Refused('bad-input', '"heldBack" must be true or false.', `${where}.heldBack`);
		pair.heldBack = fields.heldBack;
	}
	return pair;
}

function refuseTwice(named: readonly { name: string }[], list: string): void {
	const seen = new Set<string>();
	named.forEach(({ name }, i) => {
		if (seen.has(name)) throw new Refused('duplicate-name', `The name “${name}” stands twice.`, `${list}[${i}].name`);
		seen.add(name);
	});
}

/** σ on both sides or none, for all pairs or none, never beside weights, never zero on both sides of an axis. */
function refuseSigmas(pairs: readonly FitPair[]): void {
	const given = pairs.filter((pair) => pair.surveySigma ?? pair.controlSigma).length;
	if (given === 0) return;
	pairs.forEach((pair, i) => {
		const where = `pairs[${i}]`;
		if (!pair.surveySigma || !pair.controlSigma) {
			throw new Refused(
				'bad-sigma',
				`Standard deviations must be given on both sides and for all pairs, or for none; “${pair.name}” lacks some.`,
				where,
			);
		}
		if (pair.weight !== undefined)
			throw new Refused('bad-sigma', `“${pair.name}” has a weight and standard deviations; only one of them may be given.`, where);
		for (let k = 0; k < 3; k++) {
			const surveySigma = pair.surveySigma[k]!;
			const controlSigma = pair.controlSigma[k]!;
			if (surveySigma === 0 && controlSigma === 0) {
				throw new Refused(
					'bad-sigma',
					`“${pair.name}” has a standard deviation of zero on both sides of an axis.`,
					`${where}.controlSigma[${k}]`,
				);
			}
			if (Math.max(surveySigma, controlSigma) < LEAST_SIGMA) {
				throw new Refused(
					'bad-sigma',
					`A standard deviation of “${pair.name}” is too small to compute with.`,
					`${where}.controlSigma[${k}]`,
				);
			}
		}
	});
}

function readObject(value: unknown, where: string): Fields {
	if (typeof value !== 'object' || value === null || Array.isArray(value))
		throw new Refused('bad-input', `${where} must be an object.`, where);
	return value as Fields;
}

function readName(value: unknown, where: string): string {
	if (typeof value !== 'string' || value === '') throw new Refused('bad-input', 'A name is missing.', where);
	return value;
}

function readNumber(value: unknown, where: string): number {
	if (typeof value === 'number') {
		if (Math.abs(value) <= LARGEST) return value;
		throw new Refused('not-finite', `${where} is not a finite number.`, where);
	}
	if (value === null) throw new Refused('not-finite', `${where} is null where a number must stand.`, where);
	if (typeof value === 'string' && /^\s*[+-]?(nan|inf|infinity)\s*$/i.test(value))
		throw new Refused('not-finite', `${where} is not a finite number.`, where);
	throw new Refused('bad-input', `${where} must be a number.`, where);
}

function readPositive(value: unknown, where: string): number {
	const number = readNumber(value, where);
	if (!(number >= 1 / LARGEST)) throw new Refused('bad-input', `${where} must be greater than zero.`, where);
	return number;
}

function readTriple(value: unknown, where: string): unknown[] {
	if (!Array.isArray(value) || value.length !== 3) throw new Refused('bad-input', `${where} must be three numbers.`, where);
	return value;
}

function readVector(value: unknown, where: string): [number, number, number] {
	const [x, y, z] = readTriple(value, where).map((number, k) => readNumber(number, `${where}[${k}]`));
	return [x!, y!, z!];
}

function readSigma(value: unknown, where: string): [number, number, number] {
	const sigma = readVector(value, where);
	sigma.forEach((number, k) => {
		if (number < 0) throw new Refused('bad-sigma', 'A standard deviation may not be negative.', `${where}[${k}]`);
	});
	return sigma;
}

/** @param open which coordinates may be null: the plan, or either the plan or the level (both of the plan or none), or none */
function readPartial(value: unknown, where: string, open: 'none' | 'plan' | 'either'): FitPair['survey'] {
	const [x, y, z] = readTriple(value, where).map((number, k) => {
		const may = open === 'either' || (open === 'plan' && k < 2);
		return number === null && may ? null : readNumber(number, `${where}[${k}]`);
	});
	if (open === 'either' && (x === null) !== (y === null)) {
		throw new Refused('bad-input', `${where} knows one plan coordinate only; give both or none.`, where);
	}
	if (open === 'either' && x === null && z === null) throw new Refused('bad-input', `${where} has no known coordinate.`, where);
	return [x!, y!, z!];
}
