import { useFrame, useThree } from '@react-three/fiber';
import { type RefObject, useEffect } from 'react';
import { Vector3 } from 'three';
import { clearAnchors, type StageAnchor } from './stage-anchor.ts';

/** Room for a level's words, pixels a letter and for the tick. */
const letterPx = 8.4;
const tickRoomPx = 26;
/** In a narrower picture the levels' words would lie on the model. */
const leastWidthForLevelsPx = 440;

interface AnchorMoverProps {
	anchors: readonly StageAnchor[];
	overlay: RefObject<SVGSVGElement | null>;
	north: RefObject<SVGGElement | null>;
}

/** Carries the flat things along with each drawing: by attributes, without React. */
export function AnchorMover({ anchors, overlay, north }: AnchorMoverProps) {
	const invalidate = useThree((state) => state.invalidate);
	useEffect(() => {
		if (anchors.length >= 0) invalidate();
	}, [anchors, invalidate]);
	useFrame(({ camera, size }) => {
		camera.updateMatrixWorld();
		const place = new Vector3();
		const placesPx = anchors.map((anchor): [number, number] => {
			place.set(...anchor.place).project(camera);
			return [((place.x + 1) / 2) * size.width, ((1 - place.y) / 2) * size.height];
		});
		const drawn = clearAnchors(anchors, placesPx);
		anchors.forEach((anchor, i) => {
			const drawing = overlay.current?.children[i];
			if (drawing === undefined) return;
			const [placeX, y] = placesPx[i]!;
			// A level's words stand left of their place and are kept in the picture.
			const x = anchor.kind === 'level' ? Math.max(placeX, anchor.text.length * letterPx + tickRoomPx) : placeX;
			drawing.setAttribute('transform', `translate(${x.toFixed(1)} ${y.toFixed(1)})`);
			const hasRoom = anchor.kind !== 'level' || size.width >= leastWidthForLevelsPx;
			drawing.setAttribute('visibility', drawn[i] && hasRoom ? 'visible' : 'hidden');
		});
		const across = new Vector3(0, 1, 0).transformDirection(camera.matrixWorldInverse);
		north.current?.setAttribute('transform', `rotate(${((Math.atan2(across.x, across.y) * 180) / Math.PI).toFixed(1)})`);
	});
	return null;
}
