import type { Finding } from '../fit/fit-schema.ts';
import { figureInWords, modelFinding } from './ifc-finding.ts';
import { lengthUnitM, unitInWords } from './ifc-units.ts';
import type { MapConversion } from './model-schema.ts';
import type { Part21Entity, Part21File } from './part21.ts';
import { numberOf, refOf, refsOf, textOf } from './part21-value.ts';
import type { MapScaleReading } from './reading-choices.ts';

/** From the model's engineering coordinates to the map: IfcMapConversion, IfcRigidOperation, and the property sets that stand for it in IFC2x3. */

type Read = { conversion: MapConversion | null; findings: Finding[] };

const words = (value: string | null): string | null => (value === null || value.trim() === '' ? null : value.trim());

/** Says where the written scale does not fit the two units, with what either reading would mean. */
function checkScale(conversion: MapConversion, metresPerUnit: number, isWritten: boolean): Finding[] {
	const ratio = (conversion.scale * conversion.mapUnitM) / metresPerUnit;
	const findings: Finding[] = [];
	if (!(Math.abs(ratio - 1) <= 0.002)) {
		const expected = metresPerUnit / conversion.mapUnitM;
		findings.push(
			modelFinding(
				'map-scale',
				`The map conversion ${isWritten ? `writes Scale ${figureInWords(conversion.scale)}` : 'writes no Scale, which means 1'}, while the model is in ${unitInWords(metresPerUnit)} and the map in ${unitInWords(conversion.mapUnitM)}. As written, 1 m in the model is ${figureInWords(ratio)} m on the map; the units alone would ask for Scale ${figureInWords(expected)}. Choose the reading before map coordinates are used.`,
				{ asWritten: { scale: conversion.scale, mapMetresPerModelMetre: ratio }, byUnits: { scale: expected, mapMetresPerModelMetre: 1 } },
			),
		);
		// A tenth of a millionth is 0.1 mm in a kilometre: less is the writing of the number.
	} else if (Math.abs(ratio - 1) > 1e-7)
		findings.push(
			modelFinding(
				'map-scale-factor',
				`The map conversion has a scale factor of ${figureInWords(ratio)} beyond the units (${((ratio - 1) * 1e6).toFixed(1)} ppm). By the standard it multiplies heights too: ${(Math.abs(ratio - 1) * 50_000).toFixed(1)} mm at 50 m.`,
				{ mapMetresPerModelMetre: ratio },
			),
		);
	return findings;
}

function conversionFromNumbers(
	part: {
		eastings: number | null;
		northings: number | null;
		height: number | null;
		abscissa: number | null;
		ordinate: number | null;
		scale: number | null;
	},
	mapUnitM: number,
	crsName: string | null,
): MapConversion | null {
	if (part.eastings === null || part.northings === null) return null;
	let xAxisAbscissa = part.abscissa ?? 1;
	let xAxisOrdinate = part.ordinate ?? 0;
	if (part.abscissa === null && part.ordinate !== null) xAxisAbscissa = 0;
	// `$` or 0, 0 mean no turn.
	if (Math.hypot(xAxisAbscissa, xAxisOrdinate) < 1e-12) [xAxisAbscissa, xAxisOrdinate] = [1, 0];
	return {
		eastings: part.eastings,
		northings: part.northings,
		orthogonalHeight: part.height ?? 0,
		xAxisAbscissa,
		xAxisOrdinate,
		scale: part.scale === null || part.scale === 0 ? 1 : part.scale,
		mapUnitM,
		crsName,
	};
}

function fromEntity(file: Part21File, entity: Part21Entity, metresPerUnit: number): Read {
	const crs = file.entity(refOf(entity.args[1]) ?? -1);
	const mapUnitRef = crs?.type === 'IFCPROJECTEDCRS' ? refOf(crs.args[6]) : null;
	const findings: Finding[] = [];
	const written = mapUnitRef === null ? null : lengthUnitM(file, mapUnitRef);
	if (mapUnitRef !== null && written === null)
		findings.push(
			modelFinding('map-unit', `The map unit #${mapUnitRef} cannot be read as a length; the model's own unit is used for the map.`, {
				mapUnit: mapUnitRef,
			}),
		);
	const mapUnitM = written ?? metresPerUnit;
	const isRigid = entity.type === 'IFCRIGIDOPERATION';
	const scale = isRigid ? metresPerUnit / mapUnitM : numberOf(entity.args[7]);
	const conversion = conversionFromNumbers(
		{
			eastings: numberOf(entity.args[2]),
			northings: numberOf(entity.args[3]),
			height: numberOf(entity.args[4]),
			abscissa: isRigid ? null : numberOf(entity.args[5]),
			ordinate: isRigid ? null : numberOf(entity.args[6]),
			scale,
		},
		mapUnitM,
		words(textOf(crs?.args[0])),
	);
	if (!conversion) {
		findings.push(
			modelFinding(
				'map-conversion-broken',
				`The map conversion #${entity.number} has no Eastings or Northings that are numbers; the model is taken to have no map position.`,
			),
		);
		return { conversion: null, findings };
	}
	if (entity.type === 'IFCMAPCONVERSIONSCALED') {
		const factors = [8, 9, 10].map((at) => numberOf(entity.args[at]) ?? 1);
		if (factors.some((factor) => factor !== 1)) {
			if (factors.some((factor) => factor !== factors[0])) {
				findings.push(
					modelFinding(
						'map-axis-factors',
						`The map conversion #${entity.number} scales its three axes differently (${factors.map(figureInWords).join(', ')}). This is not supported: the model is taken to have no map position.`,
						{ factors },
					),
				);
				return { conversion: null, findings };
			}
			conversion.scale *= factors[0]!;
		}
	}
	findings.push(...checkScale(conversion, metresPerUnit, numberOf(entity.args[7]) !== null || isRigid));
	return { conversion, findings };
}

/** The values of the property sets `ePset_MapConversion` and `ePset_ProjectedCRS` (any case) by property name in lower case. */
function propertySet(file: Part21File, wanted: string): Map<string, { number: number | null; text: string | null }> | null {
	for (const ref of file.ofType('IFCPROPERTYSET')) {
		const set = file.entity(ref);
		if (textOf(set?.args[2])?.toLowerCase() !== wanted) continue;
		const values = new Map<string, { number: number | null; text: string | null }>();
		for (const propertyRef of refsOf(set?.args[4])) {
			const property = file.entity(propertyRef);
			const name = textOf(property?.args[0])?.toLowerCase();
			if (property && name) values.set(name, { number: numberOf(property.args[2]), text: textOf(property.args[2]) });
		}
		return values;
	}
	return null;
}

function fromPropertySets(file: Part21File, metresPerUnit: number): Read {
	const set = propertySet(file, 'epset_mapconversion');
	if (!set) return { conversion: null, findings: [] };
	const crs = propertySet(file, 'epset_projectedcrs');
	const mapUnitText = crs?.get('mapunit')?.text?.toLowerCase() ?? '';
	const named: Readonly<Record<string, number>> = {
		metre: 1,
		meter: 1,
		m: 1,
		millimetre: 0.001,
		millimeter: 0.001,
		mm: 0.001,
		foot: 0.3048,
		feet: 0.3048,
		ft: 0.3048,
	};
	const writtenUnitM = named[mapUnitText];
	const scale = set.get('scale')?.number ?? null;
	const conversion = conversionFromNumbers(
		{
			eastings: set.get('eastings')?.number ?? null,
			northings: set.get('northings')?.number ?? null,
			height: set.get('orthogonalheight')?.number ?? null,
			abscissa: set.get('xaxisabscissa')?.number ?? null,
			ordinate: set.get('xaxisordinate')?.number ?? null,
			scale,
		},
		writtenUnitM ?? metresPerUnit,
		words(crs?.get('name')?.text ?? null),
	);
	if (!conversion) return { conversion: null, findings: [] };
	const findings = checkScale(conversion, metresPerUnit, scale !== null);
	findings.push(
		modelFinding(
			'map-conversion-in-properties',
			'The map position comes from the property set ePset_MapConversion, as IFC2x3 files write it: its unit is a convention between people, so check one known point.',
			{
				mapUnitM: conversion.mapUnitM,
			},
		),
	);
	return { conversion, findings };
}

/**
 * The file's map conversion, or null; findings where its parts contradict each other. metresPerUnit is the model's. `chosen`: which reading
 * of a scale that contradicts the units a person holds for right; it changes nothing where they agree.
 */
export function readMapConversion(file: Part21File, metresPerUnit: number, chosen: MapScaleReading | null = null): Read {
	const { conversion, findings } = readAsWritten(file, metresPerUnit);
	if (conversion === null || chosen === null || !findings.some(({ code }) => code === 'map-scale')) return { conversion, findings };
	const scale = chosen === 'as-written' ? conversion.scale : metresPerUnit / conversion.mapUnitM;
	const ratio = (scale * conversion.mapUnitM) / metresPerUnit;
	return {
		conversion: { ...conversion, scale, chosenScale: chosen },
		findings: findings.map((finding) =>
			finding.code === 'map-scale'
				? {
						...finding,
						message: `${finding.message.replace(/ Choose the reading before map coordinates are used\.$/, '')} A person chose the scale ${chosen === 'as-written' ? 'as written' : 'by the units'}: 1 m in the model is ${figureInWords(ratio)} m on the map.`,
					}
				: finding,
		),
	};
}

function readAsWritten(file: Part21File, metresPerUnit: number): Read {
	const numbers = file.ofType('IFCMAPCONVERSION', 'IFCMAPCONVERSIONSCALED', 'IFCRIGIDOPERATION');
	const reads = numbers
		.map((number) => file.entity(number))
		.filter((entity) => entity !== null)
		.map((entity) => fromEntity(file, entity, metresPerUnit));
	const first = reads.find((read) => read.conversion !== null);
	if (!first) {
		const fallback = fromPropertySets(file, metresPerUnit);
		return { conversion: fallback.conversion, findings: [...reads.flatMap((read) => read.findings), ...fallback.findings] };
	}
	const findings = [...first.findings];
	const isSame = (a: MapConversion, b: MapConversion): boolean =>
		JSON.stringify({ ...a, crsName: '' }) === JSON.stringify({ ...b, crsName: '' });
	const others = reads.filter((read) => read.conversion !== null && !isSame(read.conversion, first.conversion!));
	if (others.length > 0)
		findings.push(
			modelFinding('map-conversion-contradiction', `The file has ${reads.length} map conversions that differ; the first is used.`, {
				readings: reads.map((read) => read.conversion),
			}),
		);
	return { conversion: first.conversion, findings };
}
