import { useWatch } from 'react-hook-form';
import { pluralByClass } from '#shared/tolerance/element-words.ts';
import { NumberField, SelectField, TextField, TickField } from '#src/ui/field.tsx';
import { LimitFields } from './limit-fields.tsx';
import { characteristicLabels, optionsOf, referenceLabels, stageLabels } from './rule-words.ts';
import { SuggestField } from './suggest-field.tsx';
import { hasLowerSide, type TypedSheet } from './typed-sheet.ts';

/** Words that the newest revisions have, to choose from. */
export interface KnownWords {
	readonly classes: readonly string[];
	readonly storeys: readonly string[];
	readonly buildings: readonly string[];
	readonly marks: readonly string[];
	readonly tags: readonly string[];
}

const grid = 'grid gap-3 tablet:grid-cols-2 cabin:grid-cols-3';

/** All of one rule: what it fits, from where, how far off may be, and where that is published. */
export function RuleFields({ index, known }: { index: number; known: KnownWords }) {
	const name = `rules.${index}` as const;
	const rule = useWatch<TypedSheet, typeof name>({ name });
	const isPlan = rule.characteristic === 'plan' || rule.characteristic === '';
	const isTwoSided = hasLowerSide(rule);
	return (
		<div className="flex flex-col gap-5">
			<Part title="It fits">
				<div className={grid}>
					<SelectField name={`${name}.class`} label="Elements" options={classOptions(known.classes, rule.class)} />
					<SelectField name={`${name}.characteristic`} label="What is measured" options={optionsOf(characteristicLabels, 'anything')} />
					<SelectField name={`${name}.stage`} label="Stage" options={optionsOf(stageLabels, 'any')} />
					<SuggestField name={`${name}.storey`} label="Storey" known={known.storeys} hint="Empty: any." />
					<SuggestField name={`${name}.building`} label="Building" known={known.buildings} hint="Empty: any." />
					<SuggestField name={`${name}.mark`} label="Mark" known={known.marks} hint="Of one element. Empty: any." />
					<SuggestField name={`${name}.tag`} label="Tag" known={known.tags} hint="From the model. Empty: any." />
					<SelectField
						name={`${name}.exposed`}
						label="Exposed to view"
						options={[
							{ value: '', label: 'either' },
							{ value: 'yes', label: 'exposed' },
							{ value: 'no', label: 'not exposed' },
						]}
					/>
				</div>
				<TickField name={`${name}.hasSizeBand`} label="Only elements of some size" />
				{rule.hasSizeBand && (
					<div className={grid}>
						<SelectField
							name={`${name}.sizeOf`}
							label="By their"
							options={[
								{ value: 'length', label: 'length' },
								{ value: 'height', label: 'height' },
								{ value: 'thickness', label: 'thickness' },
							]}
						/>
						<NumberField name={`${name}.sizeOverMm`} label="Over" unit="mm" isOptional hint="Empty: from nothing." />
						<NumberField name={`${name}.sizeToMm`} label="Up to and with" unit="mm" isOptional hint="The band ends here." />
					</div>
				)}
			</Part>
			<Part title="How far off may it be">
				<div className={grid}>
					<SelectField name={`${name}.reference`} label="Reference" options={optionsOf(referenceLabels, 'not said')} />
					{isPlan && (
						<SelectField
							name={`${name}.shape`}
							label="In plan"
							options={[
								{ value: 'disc', label: 'a circle about its mark' },
								{ value: 'box', label: 'a box along two axes' },
							]}
						/>
					)}
					{isPlan && rule.shape === 'box' && (
						<SelectField
							name={`${name}.axes`}
							label="The box lies along"
							options={[
								{ value: 'grid', label: 'the grid’s axes' },
								{ value: 'element', label: 'the element’s own axes' },
							]}
						/>
					)}
					{rule.characteristic === 'flatness' && <NumberField name={`${name}.straightedgeM`} label="Straightedge" unit="m" isOptional />}
				</div>
				{isTwoSided && <TickField name={`${name}.isSame`} label="The same both ways (±)" />}
				<div className="grid gap-5 tablet:grid-cols-2">
					{isTwoSided && !rule.isSame && <LimitFields name={`${name}.lower`} legend="Lower, shy or low (−)" mayTurn />}
					<LimitFields
						name={`${name}.upper`}
						legend={!isTwoSided ? 'At most' : rule.isSame ? 'Either way (±)' : 'Upper, proud or high (+)'}
						mayTurn={isTwoSided && !rule.isSame}
					/>
				</div>
			</Part>
			<Part title="Where it is published">
				<div className={grid}>
					<TextField name={`${name}.source`} label="Standard or contract document" />
					<TextField name={`${name}.clause`} label="Clause" />
					<TextField name={`${name}.edition`} label="Edition" />
				</div>
			</Part>
		</div>
	);
}

function Part({ title, children }: { title: string; children: React.ReactNode }) {
	return (
		<section className="flex flex-col gap-3 border-t border-t-hair pt-3">
			<h3 className="m-0 text-body font-strong">{title}</h3>
			{children}
		</section>
	);
}

/** Those in the models first, then all that have a word of their own, and whatever stands in the rule. */
function classOptions(inModels: readonly string[], chosen: string): { value: string; label: string }[] {
	const all = [...new Set([...inModels, ...Object.keys(pluralByClass), ...(chosen === '' ? [] : [chosen])])];
	const words = all.map((value) => ({ value, label: pluralByClass[value] ?? value }));
	const isTwice = (label: string) => words.filter((other) => other.label === label).length > 1;
	return [
		{ value: '', label: 'everything' },
		...words.map(({ value, label }) => ({ value, label: isTwice(label) ? `${label} (${value})` : label })),
	];
}
