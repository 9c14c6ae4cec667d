import { Glyph } from '#src/ui/glyph.tsx';

/** Why a pour is ready or not, sentence by sentence; what stands in the way comes first. */
export function ReadinessList({ sentences }: { sentences: readonly { text: string; isGood: boolean }[] }) {
	const sorted = [...sentences].sort((a, b) => Number(a.isGood) - Number(b.isGood));
	return (
		<ul className="m-0 flex list-none flex-col p-0">
			{sorted.map(({ text, isGood }) => (
				<li key={text} className="flex min-h-10 items-center gap-3 border-b border-hair py-1.5">
					<Glyph kind={isGood ? 'within' : 'close'} label={isGood ? 'In order:' : 'In the way:'} />
					<span className={isGood ? 'text-second' : 'font-medium'}>{text}</span>
				</li>
			))}
		</ul>
	);
}
