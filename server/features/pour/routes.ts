import { siteRoutes } from '../../platform/guard.ts';
import { addPour } from './add-pour.ts';
import { poursOf } from './queries.ts';

export const pourRoutes = {
	list: siteRoutes.pour.list.handler(({ context: { platform, member } }) => poursOf(platform.db, member)),
	add: siteRoutes.pour.add.handler(({ input, context: { platform, member } }) => addPour(platform, member, input.pour)),
};
