import { useThree } from '@react-three/fiber';
import { useEffect, useLayoutEffect, useMemo } from 'react';
import type { SceneColours } from '#src/ui/scene-colours.ts';
import { colourModel, edgeMaterial, elementState, faceMaterial, stateTexture } from './model-material.ts';
import type { ModelPicture } from './read-picture.ts';

interface ModelLayerProps {
	picture: ModelPicture;
	colours: SceneColours;
	/** Entity numbers that are not drawn. */
	hidden: ReadonlySet<number>;
	/** Entity number of the element whose edges are in ink. */
	chosen: number | null;
}

/** The model, pale and matt with its edges, in the scene's frame. What is put away costs one byte an element, no geometry. */
export function ModelLayer({ picture, colours, hidden, chosen }: ModelLayerProps) {
	const invalidate = useThree((state) => state.invalidate);
	const drawing = useMemo(() => {
		const state = stateTexture(picture.entityNumbers.length);
		return { state, faces: faceMaterial(state), edges: edgeMaterial(state, 'all'), chosenEdges: edgeMaterial(state, 'chosen') };
	}, [picture]);
	useEffect(
		() => () => {
			drawing.state.dispose();
			drawing.faces.dispose();
			drawing.edges.dispose();
			drawing.chosenEdges.dispose();
		},
		[drawing],
	);
	useLayoutEffect(() => {
		colourModel(drawing.faces, drawing.edges, drawing.chosenEdges, colours);
		invalidate();
	}, [drawing, colours, invalidate]);
	useLayoutEffect(() => {
		const states = drawing.state.image.data as Uint8Array;
		picture.entityNumbers.forEach((entityNumber, element) => {
			states[element] = hidden.has(entityNumber) ? elementState.hidden : entityNumber === chosen ? elementState.chosen : elementState.plain;
		});
		drawing.state.needsUpdate = true;
		invalidate();
	}, [drawing, picture, hidden, chosen, invalidate]);
	return picture.parts.map((part) => (
		<group key={part.name}>
			<mesh geometry={part.faces} material={drawing.faces} raycast={() => null} />
			<lineSegments geometry={part.edges} material={drawing.edges} raycast={() => null} renderOrder={1} />
			{chosen !== null && <lineSegments geometry={part.edges} material={drawing.chosenEdges} raycast={() => null} renderOrder={2} />}
		</group>
	));
}
