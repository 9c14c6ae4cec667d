import { useCallback, useMemo, useState } from 'react';
import type { StoredCheckpoint, StoredElement } from '#shared/model/contract.ts';
import { checkpointsByElement, elementsAt, placeFromAddress } from '#src/features/model/model-place.ts';
import { useAddressState } from '#src/lib/address-state.ts';

const noIds: ReadonlySet<string> = new Set();

/** What a revision's page shows and what is chosen on it: from the address, so that a link shows a colleague the same; what is ticked or typed is not. */
export function useRevisionView(elements: readonly StoredElement[], checkpoints: readonly StoredCheckpoint[]) {
	const [show, setShow] = useAddressState('show', 'push');
	const [where, setWhere] = useAddressState('in', 'push');
	const [find, setFind] = useAddressState('find');
	const [elementId, chooseElement] = useAddressState('at');
	const [checkpointId, setCheckpoint] = useAddressState('point');
	const [view, setView] = useAddressState('view', 'push');
	const [ticked, setTicked] = useState(noIds);
	const [typed, setTyped] = useState<ReadonlyMap<string, string> | null>(null);

	const place = useMemo(() => placeFromAddress(where), [where]);
	const shown = useMemo(() => elementsAt(elements, place, find ?? ''), [elements, place, find]);
	const ofElement = useMemo(() => checkpointsByElement(checkpoints), [checkpoints]);
	const shownCheckpoints = useMemo(() => shown.flatMap((element) => ofElement.get(element.elementId) ?? []), [shown, ofElement]);
	const chosen = checkpoints.find(({ id }) => id === checkpointId) ?? null;
	const chosenElement = elements.find((element) => element.elementId === (chosen?.elementId ?? elementId)) ?? null;

	const chooseCheckpoint = useCallback(
		(id: string) => {
			setCheckpoint(id);
			chooseElement(null);
		},
		[setCheckpoint, chooseElement],
	);
	const chooseOnlyElement = useCallback(
		(id: string) => {
			setCheckpoint(null);
			chooseElement(id);
		},
		[setCheckpoint, chooseElement],
	);
	const onEntity = useCallback(
		(entityNumber: number) => {
			const element = elements.find((each) => each.entityNumber === entityNumber);
			if (element) chooseOnlyElement(element.elementId);
		},
		[elements, chooseOnlyElement],
	);
	const tick = useCallback((ids: readonly string[], isTicked: boolean) => {
		setTicked((before) => {
			const after = new Set(before);
			for (const id of ids)
				if (isTicked) after.add(id);
				else after.delete(id);
			return after;
		});
	}, []);
	const untick = useCallback(() => setTicked(noIds), []);
	const type = useCallback((id: string, mark: string) => setTyped((before) => new Map(before ?? []).set(id, mark)), []);
	return {
		isCheckpoints: show === 'checkpoints',
		setShow,
		place,
		setWhere,
		find: find ?? '',
		setFind,
		view,
		setView,
		shown,
		ofElement,
		shownCheckpoints,
		chosen,
		chosenElement,
		chooseCheckpoint,
		chooseOnlyElement,
		onEntity,
		ticked,
		tick,
		untick,
		typed,
		setTyped,
		type,
	};
}
