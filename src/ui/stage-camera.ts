import { Box3, type OrthographicCamera, Vector3 } from 'three';
import type { ViewBox } from './view-commands.ts';

/** The first direction of view: from the south-west and above, all three axes alike, as a builder's sketch is drawn; the bubbles stand in front. */
export const firstDirection = new Vector3(1, 1, -0.82).normalize();

/** Where a camera looks and how near. */
export interface View {
	readonly target: Vector3;
	readonly direction: Vector3;
	/** Pixels a metre. */
	readonly zoom: number;
}

export function box3Of(box: ViewBox): Box3 {
	return new Box3(new Vector3(...box.min), new Vector3(...box.max));
}

/** Kept free at the top for what the page lays over the picture, CSS pixels. */
const headRoomPx = 58;

/** The view along `direction` that fills the picture with the box. Box in the scene's metres; the picture in CSS pixels. */
export function viewOf(box: Box3, direction: Vector3, size: { width: number; height: number }, margin = 1.1): View {
	const right = new Vector3().crossVectors(direction, new Vector3(0, 0, 1));
	if (right.lengthSq() < 1e-9) right.set(1, 0, 0);
	right.normalize();
	const up = new Vector3().crossVectors(right, direction).normalize();
	const centre = box.getCenter(new Vector3());
	let across = 0;
	let along = 0;
	for (let corner = 0; corner < 8; corner++) {
		const place = new Vector3(
			corner & 1 ? box.max.x : box.min.x,
			corner & 2 ? box.max.y : box.min.y,
			corner & 4 ? box.max.z : box.min.z,
		).sub(centre);
		across = Math.max(across, Math.abs(place.dot(right)));
		along = Math.max(along, Math.abs(place.dot(up)));
	}
	const heightPx = Math.max(size.height - headRoomPx, 80);
	const zoom = Math.min(size.width / (2 * margin * Math.max(across, 0.05)), heightPx / (2 * margin * Math.max(along, 0.05)));
	return { target: centre.addScaledVector(up, headRoomPx / 2 / zoom), direction: direction.clone(), zoom };
}

/** Puts the camera where a view asks, with near and far about the whole scene, so that depth keeps its precision. */
export function placeCamera(camera: OrthographicCamera, view: View, scene: Box3): void {
	const reachM = scene.getSize(new Vector3()).length() + scene.getCenter(new Vector3()).distanceTo(view.target) + 1;
	camera.position.copy(view.target).addScaledVector(view.direction, -reachM);
	camera.near = 0;
	camera.far = 2 * reachM;
	camera.zoom = view.zoom;
	camera.updateProjectionMatrix();
	camera.lookAt(view.target);
	camera.updateMatrixWorld();
}

/** A view between two, for a short move that shows where the picture went. */
export function viewBetween(from: View, to: View, share: number): View {
	const eased = share * share * (3 - 2 * share);
	return {
		target: from.target.clone().lerp(to.target, eased),
		direction: from.direction.clone().lerp(to.direction, eased).normalize(),
		zoom: from.zoom * (to.zoom / from.zoom) ** eased,
	};
}
