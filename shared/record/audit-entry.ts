/** What an audit entry tells of. Closed, so that a reader of the list knows every word in it. */
export const auditKinds = [
	'person-added',
	'signed-in',
	'signed-out',
	'sign-in-failed',
	'sign-in-code-asked',
	'reauthenticated',
	'codes-set-up',
	'codes-removed',
	'recovery-codes-made',
	'recovery-code-used',
	'passkey-added',
	'passkey-removed',
	'preferences-changed',
	'reset-asked',
	'password-reset',
	'password-changed',
	'sessions-ended',
	'site-founded',
	'site-settings-changed',
	'member-added',
	'member-invited',
	'deputy-named',
	'invitation-sent-again',
	'invitation-withdrawn',
	'invitation-declined',
	'invitation-accepted',
	'role-given',
	'role-ended',
	'company-added',
	'company-renamed',
	'model-uploaded',
	'model-read',
	'model-failed',
	'checkpoints-chosen',
	'checkpoint-added',
	'marks-renamed',
	'control-stored',
	'survey-stored',
	'survey-failed',
	'points-voided',
	'points-restored',
	'fit-made',
	'fit-adopted',
	'fit-checked',
	'sheet-issued',
	'check-run',
	'check-computed',
	'check-failed',
	'pour-added',
	'job-cancel-wished',
] as const;
export type AuditKind = (typeof auditKinds)[number];

export interface AuditEntry {
	kind: AuditKind;
	/** The row it is about; null where it is about the person alone. */
	subjectId: string | null;
	/** What a reader needs besides: names, numbers, hashes. No secrets, no coordinates. */
	data: Record<string, unknown>;
}
