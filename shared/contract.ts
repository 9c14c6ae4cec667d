import { accountContract } from './account/contract.ts';
import { checkContract } from './check/contract.ts';
import { controlContract } from './control/contract.ts';
import { fitContract } from './fit/contract.ts';
import { flagContract } from './flag/contract.ts';
import { jobContract } from './job/contract.ts';
import { mailContract } from './mail/contract.ts';
import { modelContract } from './model/contract.ts';
import { pourContract } from './pour/contract.ts';
import { recordContract } from './record/contract.ts';
import { siteContract } from './site/contract.ts';
import { surveyContract } from './survey/contract.ts';
import { toleranceContract } from './tolerance/contract.ts';

const parts = {
	account: accountContract,
	site: siteContract,
	mail: mailContract,
	job: jobContract,
	model: modelContract,
	control: controlContract,
	survey: surveyContract,
	fit: fitContract,
	tolerance: toleranceContract,
	check: checkContract,
	flag: flagContract,
	pour: pourContract,
	record: recordContract,
};

type Parts = typeof parts;
/** By its name alone in what is made of it: written out, all routes are longer than the compiler takes. */
export interface Contract extends Parts {}

/** The API, whole. */
export const contract: Contract = parts;
