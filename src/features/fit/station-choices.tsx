import { Button } from '#src/ui/button.tsx';
import { Quantity } from './plan-choices.tsx';
import type { PlannedStation } from './survey-plan.ts';

interface StationChoicesProps {
	stations: readonly PlannedStation[];
	/** Where a further one is put at first. */
	nextPlace: PlannedStation['place'];
	onStations: (stations: readonly PlannedStation[]) => void;
}

/** More set-ups than this nobody plans for one survey. */
const mostStations = 12;

/** Where the instrument will stand: σ of a sighting follow from its range and direction. */
export function StationChoices({ stations, nextPlace, onStations }: StationChoicesProps) {
	const move = (index: number, axis: 0 | 1 | 2, value: number) =>
		onStations(
			stations.map((station, place) => {
				if (place !== index) return station;
				const next: [number, number, number] = [...station.place];
				next[axis] = value;
				return { ...station, place: next };
			}),
		);
	const name = `S${1 + Math.max(0, ...stations.map((station) => Number(station.name.slice(1))))}`;
	return (
		<fieldset className="m-0 border-0 p-0">
			<legend className="mb-1.5 p-0 font-medium">Stations, in the design</legend>
			<ul className="m-0 flex list-none flex-col gap-3 p-0">
				{stations.map((station, index) => (
					<li key={station.name} className="grid grid-cols-3 items-end gap-x-3.5 gap-y-2 tablet:grid-cols-[1fr_1fr_1fr_auto]">
						<Quantity
							label={`${station.name} east`}
							unit="m"
							value={station.place[0]}
							onValue={(value) => move(index, 0, value)}
							isCoordinate
						/>
						<Quantity label="north" unit="m" value={station.place[1]} onValue={(value) => move(index, 1, value)} isCoordinate />
						<Quantity label="level" unit="m" value={station.place[2]} onValue={(value) => move(index, 2, value)} isCoordinate />
						{stations.length > 1 && (
							<span className="max-tablet:col-span-3">
								<Button onClick={() => onStations(stations.filter((other) => other !== station))}>Leave {station.name} out</Button>
							</span>
						)}
					</li>
				))}
			</ul>
			{stations.length < mostStations && (
				<p className="mt-2.5 mb-0">
					<Button onClick={() => onStations([...stations, { name, place: nextPlace }])}>Add a station</Button>
				</p>
			)}
		</fieldset>
	);
}
