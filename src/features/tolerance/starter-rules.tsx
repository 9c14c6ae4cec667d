import { useState } from 'react';
import { extractCaution, publishedExtracts } from '#shared/tolerance/published-extracts.ts';
import { ruleSentence } from '#shared/tolerance/rule-sentence.ts';
import type { ToleranceRule } from '#shared/tolerance/sheet-schema.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';

/** Adds published figures to a draft, read whole with their sources before they are taken. */
export function StarterRules({ onAdd }: { onAdd: (rules: readonly ToleranceRule[]) => void }) {
	const [isOpen, setOpen] = useState(false);
	return (
		<>
			<Button onClick={() => setOpen(true)}>Add published figures …</Button>
			<Dialog isOpen={isOpen} onClose={() => setOpen(false)} title="Published figures">
				<p className="mt-0">
					Extracts, each a starting point. A publication is to be read whole, and contracts often change it. <b>{extractCaution}</b>
				</p>
				{publishedExtracts.map(({ name, about, rules }) => (
					<section key={name} className="border-t border-t-hair py-3" aria-label={name}>
						<h3 className="m-0 text-body font-strong">{name}</h3>
						<p className="m-0 text-small text-second">{about}</p>
						<ul className="m-0 my-2 pl-5">
							{rules.map(({ rule }) => (
								<li key={rule.id}>
									{ruleSentence(rule)} <span className="text-small text-second">({[rule.clause, rule.edition].join(', ')})</span>
								</li>
							))}
						</ul>
						<Button
							onClick={() => {
								onAdd(rules.map(({ rule }) => rule));
								setOpen(false);
							}}
						>
							Add these<span className="sr-only"> of {name}</span>
						</Button>
					</section>
				))}
			</Dialog>
		</>
	);
}
