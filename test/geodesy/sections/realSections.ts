import { existsSync, readFileSync } from 'node:fs';
import type { Feature, FeatureCollection, Polygon } from 'geojson';
import { crs } from '../../../src/geodesy/crs.js';
import { sectionLayer, type SectionLayer } from '../../../src/geodesy/sections/sectionLayer.js';
import type { Section, SectionFeatures } from '../../../src/geodesy/sections/types.js';

const FILE = new URL('../../../../shared/checks/sections_public_land.geojson', import.meta.url).pathname;

/** Three sections of the Willamette Meridian, BLM, public domain. They are read where they lie; nothing of them is kept here. */
export const haveRealSections = existsSync(FILE);

/** State Plane in feet, the sections' own UTM zone, and the next one, whose scale is far from 1 there. */
export const FRAMES = [2270, 26911, 26910] as const;

type Properties = Record<string, string | number | boolean | null>;

export function realFeatures(): ReadonlyArray<Feature<Polygon, Properties>> {
  return (JSON.parse(readFileSync(FILE, 'utf8')) as FeatureCollection<Polygon, Properties>).features;
}

/** Longitudes and latitudes, which are taken for NAD83, in metres of a frame. */
export function inFrame(features: ReadonlyArray<Feature<Polygon, Properties>>, epsg: number): SectionFeatures {
  const frame = crs(epsg);
  return {
    source: 'sections.geojson', crs: frame,
    features: features.map(({ geometry, properties }) => ({
      properties,
      geometry: { type: 'Polygon', coordinates: geometry.coordinates.map((ring) => ring.map(([lon, lat]) => frame.forward(lon!, lat!))) },
    })),
  };
}

export function realLayer(epsg: number): SectionLayer {
  return sectionLayer(inFrame(realFeatures(), epsg));
}

export const NUMBERS = [3, 4, 9] as const;

export function realSection(layer: SectionLayer, section: number): Section {
  return layer.section({ township: 35, townshipDir: 'S', range: 29, rangeDir: 'E', section, meridian: 'Willamette' }, 'test');
}
