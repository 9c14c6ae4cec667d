import { get, useFormState, useWatch } from 'react-hook-form';
import { ruleSentence } from '#shared/tolerance/rule-sentence.ts';
import { counted } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { type KnownWords, RuleFields } from './rule-fields.tsx';
import { isDerived } from './rule-words.ts';
import { ruleOfTyped, type TypedRule, type TypedSheet } from './typed-sheet.ts';

interface RuleRowProps {
	index: number;
	ruleCount: number;
	/** How many checkpoints it decides; null while that is being counted. */
	decides: number | null;
	known: KnownWords;
	isOpen: boolean;
	onOpen: (isOpen: boolean) => void;
	onMove: (to: number) => void;
	onCopy: () => void;
	onDelete: () => void;
}

/** One rule of a draft: its number, its sentence as typed, what it decides, and, opened, its fields. */
export function RuleRow({ index, ruleCount, decides, known, isOpen, onOpen, onMove, onCopy, onDelete }: RuleRowProps) {
	const name = `rules.${index}` as const;
	const rule = useWatch<TypedSheet, typeof name>({ name });
	const { errors } = useFormState<TypedSheet>({ name });
	const isFaulty = get(errors, name) !== undefined;
	const number = index + 1;
	return (
		<li id={`rule-${rule.id}`} className="sheet px-4.5 py-3.5" aria-label={`Rule ${number}`}>
			<div className="flex flex-wrap items-start gap-x-4 gap-y-2">
				<span className="w-6 text-right text-second">{number}</span>
				<span className="min-w-0 flex-1 basis-64">
					<span className="block font-strong">{sentenceOf(rule)}</span>
					<span className="block text-second">
						{decidesWords(rule, decides)}
						{rule.source.trim() === '' ? ' · no source is named' : ''}
						{isFaulty && !isOpen ? ' · has a fault' : ''}
					</span>
				</span>
				<span className="flex flex-wrap gap-2">
					<Button aria-expanded={isOpen} onClick={() => onOpen(!isOpen)}>
						{isOpen ? 'Close' : 'Change'}
						<span className="sr-only"> rule {number}</span>
					</Button>
					<Button aria-label={`Move rule ${number} up`} whyNot={index > 0 ? null : 'It is the first.'} onClick={() => onMove(index - 1)}>
						Up
					</Button>
					<Button
						aria-label={`Move rule ${number} down`}
						whyNot={number < ruleCount ? null : 'It is the last.'}
						onClick={() => onMove(index + 1)}
					>
						Down
					</Button>
					<Button aria-label={`Copy rule ${number}`} onClick={onCopy}>
						Copy
					</Button>
					<Button aria-label={`Delete rule ${number}`} onClick={onDelete}>
						Delete
					</Button>
				</span>
			</div>
			{isOpen && (
				<div className="mt-4">
					<RuleFields index={index} known={known} />
				</div>
			)}
		</li>
	);
}

/** The rule in words as it is typed now; where a field is empty or wrong there is no sentence yet. */
function sentenceOf(rule: TypedRule): string {
	let isWhole = true;
	const read = ruleOfTyped(rule, () => {
		isWhole = false;
	});
	return isWhole ? ruleSentence(read) : 'Not whole yet';
}

function decidesWords({ characteristic }: TypedRule, decides: number | null): string {
	if (isDerived(characteristic)) return 'for what is reckoned from several checkpoints';
	if (decides === null) return 'what it decides is being counted';
	return decides === 0 ? 'decides no checkpoint' : `decides ${counted(decides, 'checkpoint')}`;
}
