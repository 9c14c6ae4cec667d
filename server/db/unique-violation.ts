/** True where the database refused a row because another has the same value under this unique constraint or index. The same on both drivers. */
export function isUniqueViolation(error: unknown, constraint: string): boolean {
	const cause = error instanceof Error ? error.cause : undefined;
	return (
		typeof cause === 'object' &&
		cause !== null &&
		'code' in cause &&
		cause.code === '23505' &&
		'constraint' in cause &&
		cause.constraint === constraint
	);
}
