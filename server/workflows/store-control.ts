import { storeControl } from '../features/control/store-control.ts';
import { siteRoutes } from '../platform/guard.ts';
import { faultsOf } from './faults-of.ts';
import { rememberColumnOrder } from './remember-column-order.ts';

/** A control list becomes a control set, and the order of its columns is remembered on the site: both or neither. */
export const storeControlRoute = siteRoutes.control.store.handler(async ({ input, context: { platform, member }, errors }) => {
	const stored = await storeControl(platform, member, input, (tx) => rememberColumnOrder(tx, member.siteId, input.reading));
	if (!stored.ok) throw errors.FAULTS(faultsOf(stored));
	return stored.set;
});
