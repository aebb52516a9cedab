import { colourAt, hexColour, type Ramp } from './colourRamps.js';
import { rampValue, type ColourRange } from './colourRange.js';
import { escapeXml } from './gdalMetadata.js';

export interface SldOptions {
  /** Name of the layer that the style is for. */
  readonly layer: string;
  readonly title?: string;
  readonly unit?: string;
  /** Colours that are listed; a reader goes in straight lines between them. */
  readonly entries?: number;
}

export const SLD_DEFAULTS = Object.freeze({ title: '', unit: '', entries: 33 });

/** Digits of a listed value: more than a map's legend needs, fewer than would show rounding of the machine. */
const DIGITS = 6;

/**
 * A style for a raster layer that shows it in the colours of our own pictures.
 * Source: OGC 02-070, Styled Layer Descriptor 1.0, clause 11.5 (RasterSymbolizer).
 */
export function sldStyle(ramp: Ramp, range: ColourRange, options: SldOptions): string {
  const { layer, title, unit, entries } = { ...SLD_DEFAULTS, ...options };
  const rows = Array.from({ length: entries }, (_, i) => {
    const t = i / (entries - 1);
    const value = String(Number(rampValue(range, t).toPrecision(DIGITS)) || 0);
    const label = unit ? `${value} ${unit}` : value;
    return `            <ColorMapEntry color="${hexColour(colourAt(ramp, t))}" quantity="${value}" label="${escapeXml(label)}"/>\n`;
  });
  return `<?xml version="1.0" encoding="UTF-8"?>
<StyledLayerDescriptor version="1.0.0" xmlns="http://www.opengis.net/sld" xmlns:ogc="http://www.opengis.net/ogc" xmlns:xlink="http://www.w3.org/1999/xlink" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance" xsi:schemaLocation="http://www.opengis.net/sld http://schemas.opengis.net/sld/1.0.0/StyledLayerDescriptor.xsd">
  <NamedLayer>
    <Name>${escapeXml(layer)}</Name>
    <UserStyle>
      <Title>${escapeXml(title || layer)}</Title>
      <FeatureTypeStyle>
        <Rule>
          <RasterSymbolizer>
            <Opacity>1.0</Opacity>
            <ColorMap>
${rows.join('')}            </ColorMap>
          </RasterSymbolizer>
        </Rule>
      </FeatureTypeStyle>
    </UserStyle>
  </NamedLayer>
</StyledLayerDescriptor>
`;
}
