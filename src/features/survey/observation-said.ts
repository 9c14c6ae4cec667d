/** Leaves a record out of which nothing was said, so that blank is stored as nothing and not as answers. */
export function saidOf<Form extends { observation?: object | undefined }>(
	form: Form,
): Omit<Form, 'observation'> & Pick<Form, 'observation'> {
	const { observation, ...rest } = form;
	const isBlank = observation === undefined || Object.values(observation).every((value) => value === null || value === '');
	return isBlank ? rest : form;
}
