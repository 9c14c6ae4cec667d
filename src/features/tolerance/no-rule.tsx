import type { SheetWeight } from '#shared/tolerance/contract.ts';
import { classInWords } from '#shared/tolerance/element-words.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { characteristicLabels } from './rule-words.ts';
import type { TypedRule } from './typed-sheet.ts';

interface NoRuleProps {
	weight: SheetWeight;
	/** Begins a rule for them; absent where the sheet is read only. */
	onBegin?: (about: Pick<TypedRule, 'class' | 'characteristic'>) => void;
}

/** The checkpoints that no rule decides, by class and what is measured. */
export function NoRule({ weight, onBegin }: NoRuleProps) {
	if (weight.undecidedCount === 0) return <p className="m-0">Every checkpoint of the newest revisions has a rule.</p>;
	return (
		<section aria-labelledby="no-rule">
			<h3 id="no-rule" className="m-0 mb-2 text-body font-strong">
				No rule decides {counted(weight.undecidedCount, 'checkpoint')}
			</h3>
			<ul className="sheet m-0 list-none p-0">
				{weight.undecided.map((group) => (
					<li
						key={`${group.class} ${group.characteristic}`}
						className="flex flex-wrap items-center gap-x-4 gap-y-1 border-b border-b-hair px-4 py-2 last:border-b-0"
					>
						<span className="min-w-0 flex-1 basis-64">
							<b>{classInWords(group.class)}</b>, {characteristicLabels[group.characteristic].toLowerCase()}:{' '}
							{counted(group.count, 'checkpoint')}
							<span className="block text-second">{group.marks.join(', ')}</span>
						</span>
						{onBegin && (
							<Button onClick={() => onBegin({ class: group.class, characteristic: group.characteristic })}>Begin a rule for them</Button>
						)}
					</li>
				))}
			</ul>
		</section>
	);
}
