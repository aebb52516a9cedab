import type { Scenario, ScenarioPoint, ScenarioRings } from './types.js';

/** The scenario with every easting and northing in metres; `metresPerUnit` is the CRS's own. */
export function inMetres(scenario: Scenario, metresPerUnit: number): Scenario {
  if (scenario.coordinates === 'metres') return scenario;
  const point = ([x, y]: ScenarioPoint): ScenarioPoint => [x * metresPerUnit, y * metresPerUnit];
  const rings = (all: ScenarioRings): ScenarioRings => all.map((ring) => ring.map(point));
  const placed = <T extends { readonly at: ScenarioPoint }>(item: T): T => ({ ...item, at: point(item.at) });
  return {
    ...scenario,
    coordinates: 'metres',
    parcel: scenario.parcel.map(rings),
    exclusions: scenario.exclusions.map(rings),
    lines: { ...scenario.lines, unwalked: scenario.lines.unwalked.map(placed) },
    casings: scenario.casings.map(placed),
    pipelines: scenario.pipelines.map((pipe) => ({ ...pipe, points: pipe.points.map(point) })),
    scrap: scenario.scrap.map(placed),
    pulled: scenario.pulled.map(placed),
  };
}
