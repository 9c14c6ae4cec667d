import { useMutation, useQueryClient } from '@tanstack/react-query';
import { useState } from 'react';
import { z } from 'zod';
import { plainText } from '#shared/base-contract.ts';
import type { PourCondition } from '#shared/pour/contract.ts';
import { api } from '#src/lib/api.ts';
import { moment } from '#src/lib/format.ts';
import { Button } from '#src/ui/button.tsx';
import { Dialog } from '#src/ui/dialog.tsx';
import { LongTextField } from '#src/ui/field.tsx';
import { Form, Submit } from '#src/ui/form.tsx';
import { Glyph } from '#src/ui/glyph.tsx';

interface ConditionListProps {
	siteId: string;
	pourId: string;
	conditions: readonly PourCondition[];
	mayMeet: boolean;
	timeZone: string;
	now: Date;
}

const schema = z.object({ words: plainText(300) });

/** The conditions of a release: whose, by when, what shows it; and the press by which one says that it is done. */
export function ConditionList({ siteId, pourId, conditions, mayMeet, timeZone, now }: ConditionListProps) {
	const [meeting, setMeeting] = useState<PourCondition | null>(null);
	const queries = useQueryClient();
	const meet = useMutation(api.pour.meetCondition.mutationOptions());
	if (conditions.length === 0) return null;
	return (
		<>
			<h3 className="m-0 mt-3 text-lead font-strong">On condition</h3>
			<ul className="m-0 list-none p-0">
				{conditions.map((condition) => (
					<li key={condition.conditionId} className="flex flex-wrap items-center gap-x-3 gap-y-1 border-b border-hair py-2">
						<Glyph kind={condition.isMet ? 'within' : 'close'} label={condition.isMet ? 'Met:' : 'Not met yet:'} />
						<span className="min-w-0 flex-1 basis-52">
							<b className="block">{condition.text}</b>
							<span className="text-second">
								{condition.owner}
								{condition.dueAt && `, by ${moment(condition.dueAt, timeZone, now)}`}.{' '}
								{condition.isMet
									? `Met: ${condition.metWords}. ${condition.metBy}${condition.metAt ? `, ${moment(condition.metAt, timeZone, now)}` : ''}`
									: `To be shown by ${condition.proof}`}
							</span>
						</span>
						{!condition.isMet && mayMeet && <Button onClick={() => setMeeting(condition)}>Met</Button>}
					</li>
				))}
			</ul>
			{meeting !== null && (
				<Dialog isOpen onClose={() => setMeeting(null)} title={`Met: ${meeting.text}`}>
					<Form
						schema={schema}
						values={{ words: '' }}
						onSubmit={async ({ words }) => {
							await meet.mutateAsync({ siteId, pourId, conditionId: meeting.conditionId, words });
							await queries.invalidateQueries({ queryKey: api.pour.key() });
							setMeeting(null);
						}}
					>
						<LongTextField name="words" label="What shows it" hint={`Asked for: ${meeting.proof}`} />
						<Submit next="Who released it is told.">It is met</Submit>
					</Form>
				</Dialog>
			)}
		</>
	);
}
