import { useId } from 'react';
import { auditKinds } from '#shared/record/audit-entry.ts';
import { FieldFrame } from '#src/ui/field.tsx';
import { kindWords } from './audit-words.ts';

interface AuditFiltersProps {
	kind: string | null;
	onKind: (kind: string | null) => void;
	userId: string | null;
	onUser: (userId: string | null) => void;
	people: readonly { userId: string; name: string }[];
}

const selectClass =
	'block min-h-11 w-full rounded-corner border-[1.5px] border-field bg-sheet px-3 py-1.5 text-body text-ink pointer-coarse:min-h-12';

/** Which acts, by whom. */
export function AuditFilters({ kind, onKind, userId, onUser, people }: AuditFiltersProps) {
	const kindId = useId();
	const whoId = useId();
	return (
		<div className="mb-4 flex flex-wrap gap-4">
			<FieldFrame id={kindId} label="Act" className="min-w-0 flex-1 basis-60">
				<select id={kindId} className={selectClass} value={kind ?? ''} onChange={(event) => onKind(event.target.value || null)}>
					<option value="">All</option>
					{auditKinds.map((one) => (
						<option key={one} value={one}>
							{kindWords(one)}
						</option>
					))}
				</select>
			</FieldFrame>
			<FieldFrame id={whoId} label="By" className="min-w-0 flex-1 basis-60">
				<select id={whoId} className={selectClass} value={userId ?? ''} onChange={(event) => onUser(event.target.value || null)}>
					<option value="">Everybody</option>
					{people.map((one) => (
						<option key={one.userId} value={one.userId}>
							{one.name}
						</option>
					))}
				</select>
			</FieldFrame>
		</div>
	);
}
