import type { Finding } from '#shared/fit/fit-schema.ts';
import { counted, modelFinding } from '#shared/model/ifc-finding.ts';
import type { ModelHead } from '#shared/model/read-model-head.ts';

/** Said where a model is so large that one checkpoint of each sort is placed. */
export function manyElements(of: number): Finding {
	return modelFinding(
		'many-elements',
		`The model has ${of} elements: one checkpoint of each sort was placed on each. Split the model to get them closer.`,
		{ elements: of },
	);
}

/** What the elements of a file give to say: GlobalIds that repeat or are missing, bodies and places that cannot be used. */
export function elementFindings(
	head: ModelHead,
	byGlobalId: ReadonlyMap<string, number>,
	withoutBody: readonly string[],
	contradicting: readonly string[],
	of: number,
): Finding[] {
	const findings: Finding[] = [];
	const repeated = [...byGlobalId].filter(([globalId, count]) => globalId !== '' && count > 1);
	if (repeated.length > 0)
		findings.push(
			modelFinding(
				'repeated-global-id',
				`${counted(repeated.length, 'GlobalId stands', 'GlobalIds stand')} for more than one element (${repeated[0]![0]} for ${repeated[0]![1]}). Such elements are told apart by their entity numbers, which the next revision may not keep.`,
				{ count: repeated.length },
				repeated.map(([globalId]) => globalId),
			),
		);
	const missing = byGlobalId.get('') ?? 0;
	if (missing > 0)
		findings.push(
			modelFinding(
				'missing-global-id',
				`${counted(missing, 'element has', 'elements have')} no GlobalId. Such elements are known by their entity numbers, which the next revision may not keep.`,
				{ count: missing },
			),
		);
	if (withoutBody.length > 0)
		findings.push(
			modelFinding(
				'no-geometry',
				`${withoutBody.length} of ${counted(of, 'element', 'elements')} ${withoutBody.length === 1 ? 'has' : 'have'} no geometry that can be used.`,
				{ count: withoutBody.length, of },
				withoutBody,
			),
		);
	if (contradicting.length > 0)
		findings.push(
			modelFinding(
				'linear-placement-contradiction',
				`${counted(contradicting.length, 'element stands', 'elements stand')} along an alignment, and the position written beside that says another place. The picture follows the alignment; no checkpoints are placed there.`,
				{ count: contradicting.length },
				contradicting,
			),
		);
	if (head.structure.cycles.size > 0)
		findings.push(
			modelFinding(
				'structure-cycle',
				`The spatial structure contains itself at ${[...head.structure.cycles]
					.slice(0, 5)
					.map((number) => `#${number}`)
					.join(', ')}; elements there have no storey.`,
			),
		);
	return findings;
}
