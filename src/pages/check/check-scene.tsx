import { useQuery } from '@tanstack/react-query';
import { type RefObject, useCallback, useEffect, useImperativeHandle, useMemo, useRef, useState } from 'react';
import { Ray, Raycaster, Vector2, Vector3 } from 'three';
import type { RevisionDetail } from '#shared/model/contract.ts';
import { DeviationLayer } from '#src/features/check/deviation-layer.tsx';
import { type DeviationMark, nearestMark } from '#src/features/check/deviation-mark.ts';
import { type DrawnAxis, frameAnchors, withBubbles } from '#src/features/model/grid-frame.ts';
import { GridLayer } from '#src/features/model/grid-layer.tsx';
import { ModelLayer } from '#src/features/model/model-layer.tsx';
import { type ModelPicture, readPicture } from '#src/features/model/read-picture.ts';
import { api } from '#src/lib/api.ts';
import { useSceneColours } from '#src/ui/scene-colours.ts';
import { Stage, type StagePress } from '#src/ui/stage.tsx';
import type { StageAnchor } from '#src/ui/stage-anchor.ts';
import type { ViewBox, ViewCommands } from '#src/ui/view-commands.ts';

interface CheckSceneProps {
	siteId: string;
	revisionId: string;
	label: string;
	/** Of the whole, design frame, metres. */
	box: ViewBox;
	axes: readonly DrawnAxis[];
	storeys: RevisionDetail['reading']['storeys'];
	marks: readonly DeviationMark[];
	chosenId: string | null;
	chosenEntity: number | null;
	hidden: ReadonlySet<number>;
	times: number;
	note: string;
	/** Boxes in the design frame. */
	commands: RefObject<ViewCommands | null>;
	onChoose: (checkpointId: string) => void;
	onPickElement: (entityNumber: number) => void;
	/** When something is framed: the elements that stand between it and the eye. */
	onInTheWay: (entityNumbers: readonly number[]) => void;
	onReady: () => void;
	onFailed: (why: string) => void;
	onLost: () => void;
}

/** How much further away than its face a mark may seem and still be seen, metres. */
const faceSlackM = 0.06;
const hiddenPenaltyPx = 9;

/** The 3D picture of a check: model, grid, deviations. The only module with three.js in it, loaded when first asked for. */
export default function CheckScene(props: CheckSceneProps) {
	const { siteId, revisionId, onReady, onFailed } = props;
	const file = useQuery({
		...api.model.picture.queryOptions({ input: { siteId, revisionId } }),
		staleTime: Number.POSITIVE_INFINITY,
		gcTime: 60_000,
	});
	const [picture, setPicture] = useState<ModelPicture | null>(null);
	useEffect(() => {
		if (file.error) onFailed('This revision has no picture that can be had now. The plan takes its place.');
	}, [file.error, onFailed]);
	useEffect(() => {
		const blob = file.data;
		if (blob === undefined) return;
		let isWanted = true;
		let made: ModelPicture | null = null;
		blob
			.arrayBuffer()
			.then(readPicture)
			.then((read) => {
				if (!isWanted) return read.dispose();
				made = read;
				setPicture(read);
				onReady();
			})
			.catch((error: unknown) => {
				console.error(error);
				if (isWanted) onFailed('The model’s picture cannot be read by this browser. The plan takes its place.');
			});
		return () => {
			isWanted = false;
			made?.dispose();
		};
	}, [file.data, onReady, onFailed]);
	return picture && <PictureScene {...props} picture={picture} />;
}

function PictureScene({
	picture,
	label,
	box,
	axes,
	storeys,
	marks,
	chosenId,
	chosenEntity,
	hidden,
	times,
	note,
	commands,
	onChoose,
	onPickElement,
	onInTheWay,
	onLost,
}: CheckSceneProps & { picture: ModelPicture }) {
	const colours = useSceneColours();
	const { originM } = picture;
	const sceneCommands = useRef<ViewCommands | null>(null);
	const frame = useMemo(() => frameAnchors(axes, storeys, box, originM), [axes, storeys, box, originM]);
	const chosen = marks.find((mark) => mark.checkpointId === chosenId);
	useImperativeHandle(
		commands,
		() => ({
			frame: (asked) => {
				sceneCommands.current?.frame(localBox(asked, originM));
				const toEye = sceneCommands.current?.toEye?.();
				if (chosen !== undefined && toEye) onInTheWay(inTheWay(picture, chosen, chosenEntity, toEye));
			},
			whole: () => sceneCommands.current?.whole(),
		}),
		[originM, picture, chosen, chosenEntity, onInTheWay],
	);
	const anchors = useMemo((): StageAnchor[] => {
		if (chosen === undefined) return frame;
		const [east, north, height] = chosen.place;
		const place: [number, number, number] = [east - originM[0], north - originM[1], height - originM[2]];
		return [...frame, { key: 'chosen', kind: 'ring', place, text: '' }];
	}, [frame, chosen, originM]);
	const bounds = useMemo(() => localBox(withBubbles(box, axes), originM), [box, axes, originM]);

	const press = useCallback(
		({ x, y, width, height, isCoarse, camera }: StagePress) => {
			const seen = new Vector3();
			const placesPx = new Float32Array(2 * marks.length);
			marks.forEach(({ place }, i) => {
				seen.set(place[0] - originM[0], place[1] - originM[1], place[2] - originM[2]).project(camera);
				placesPx[2 * i] = ((seen.x + 1) / 2) * width;
				placesPx[2 * i + 1] = ((1 - seen.y) / 2) * height;
			});
			const rays = new Raycaster();
			const isBehind = (mark: number): boolean => {
				rays.setFromCamera(new Vector2((placesPx[2 * mark]! / width) * 2 - 1, 1 - (placesPx[2 * mark + 1]! / height) * 2), camera);
				const { place } = marks[mark]!;
				seen.set(place[0] - originM[0], place[1] - originM[1], place[2] - originM[2]);
				const first = firstUnder(picture, rays, hidden);
				return first !== null && first.distanceM < seen.sub(rays.ray.origin).dot(rays.ray.direction) - faceSlackM;
			};
			const mark = nearestMark(placesPx, x, y, isCoarse ? 26 : 14, (near) => (isBehind(near) ? hiddenPenaltyPx : 0));
			if (mark !== null) return onChoose(marks[mark]!.checkpointId);
			rays.setFromCamera(new Vector2((x / width) * 2 - 1, 1 - (y / height) * 2), camera);
			const first = firstUnder(picture, rays, hidden);
			if (first !== null) onPickElement(first.entityNumber);
		},
		[marks, originM, picture, hidden, onChoose, onPickElement],
	);
	return (
		<Stage label={label} bounds={bounds} anchors={anchors} commands={sceneCommands} onPress={press} onLost={onLost} note={note}>
			<GridLayer axes={axes} floorM={box.min[2]} originM={originM} colours={colours} />
			<ModelLayer picture={picture} colours={colours} hidden={hidden} chosen={chosenEntity} />
			<DeviationLayer marks={marks} chosenId={chosenId} originM={originM} times={times} colours={colours} />
		</Stage>
	);
}

function localBox(box: ViewBox, originM: ModelPicture['originM']): ViewBox {
	const less = (place: readonly [number, number, number]): [number, number, number] => [
		place[0] - originM[0],
		place[1] - originM[1],
		place[2] - originM[2],
	];
	return { min: less(box.min), max: less(box.max) };
}

/** The elements a look at a mark goes through, without its own. `toEye`: unit vector. */
function inTheWay(picture: ModelPicture, { place }: DeviationMark, own: number | null, toEye: readonly [number, number, number]): number[] {
	const local = new Vector3(...place).sub(new Vector3(...picture.originM));
	const direction = new Vector3(...toEye);
	const ray = new Ray(local.addScaledVector(direction, faceSlackM), direction);
	const found = picture.parts.flatMap((part) => part.under(ray).map(({ element }) => picture.entityNumbers[element]!));
	return [...new Set(found)].filter((entityNumber) => entityNumber !== own);
}

/** The nearest element under a ray that is drawn. */
function firstUnder(
	picture: ModelPicture,
	{ ray }: Raycaster,
	hidden: ReadonlySet<number>,
): { entityNumber: number; distanceM: number } | null {
	let nearest: { entityNumber: number; distanceM: number } | null = null;
	for (const part of picture.parts) {
		for (const { element, distanceM } of part.under(ray)) {
			const entityNumber = picture.entityNumbers[element];
			if (entityNumber === undefined || hidden.has(entityNumber)) continue;
			if (nearest === null || distanceM < nearest.distanceM) nearest = { entityNumber, distanceM };
			break;
		}
	}
	return nearest;
}
