import { describe, expect, it } from 'vitest';
import { chanceCell, chanceWords, compass, counted, frameUnit, length, listed, number, sentence } from '../../src/report/format.js';
import { rampPlace } from '../../src/raster/colourRange.js';
import { html } from '../../src/report/html.js';
import { mapFrame, mapTicks, roundStep, ticks } from '../../src/report/mapFrame.js';
import { mapLegend } from '../../src/report/mapLegend.js';
import { placeLabels } from '../../src/report/placeLabels.js';
import { legendValues, residualRange } from '../../src/report/residualRange.js';
import { headline } from '../../src/report/sentences.js';
import { STYLE } from '../../src/report/style.js';
import { walkedPath } from '../../src/report/walkedLines.js';
import { content, readings, residual, site } from './madeContent.js';

const spaces = (text: string): string => text.replace(/[\u00a0\u202f]/g, ' ');

describe('numbers in words', () => {
  it.each([[0, '0 %'], [0.0004, '< 0.1 %'], [0.001, '0.1 %'], [0.1234, '12.3 %'], [0.999, '99.9 %'], [0.9996, '> 99.9 %'], [1, '> 99.9 %'], [NaN, '–']])('a chance of %f stands as %s', (p, text) => expect(spaces(chanceCell(p))).toBe(text));
  it.each([[0, '0 %'], [0.004, 'less than 1 %'], [0.126, '13 %'], [0.99, '99 %'], [0.995, 'more than 99 %'], [NaN, 'an unknown chance']])('a chance of %f reads %s', (p, text) => expect(spaces(chanceWords(p))).toBe(text));
  it.each([[1234567.891, 2, '1 234 567.89'], [-0.04, 1, '0.0'], [-12.34, 1, '−12.3'], [999, 0, '999'], [1000, 0, '1 000'], [NaN, 1, '–']])('%f with %i decimals is %s', (value, decimals, text) => expect(spaces(number(value, decimals))).toBe(text));
  it.each([[0, 'north'], [22.4, 'north'], [22.6, 'north-east'], [180, 'south'], [350, 'north'], [-90, 'west'], [302, 'north-west']])('%f° is %s', (azimuth, word) => expect(compass(azimuth)).toBe(word));

  it('a length stands in feet too where the survey is in feet', () => {
    expect(spaces(length(9.4, frameUnit(site.frame)))).toBe('9.4 m (31 ft)');
    expect(spaces(length(9.4, { symbol: 'm', words: 'metres', metres: 1, decimals: 2 }))).toBe('9.4 m');
  });

  it('lists, counts and ends sentences', () => {
    expect([listed([]), listed(['a']), listed(['a', 'b']), listed(['a', 'b', 'c'])]).toEqual(['', 'a', 'a and b', 'a, b and c']);
    expect(spaces(`${counted(1, 'record')}, ${counted(2, 'record')}`)).toBe('1 record, 2 records');
    expect([sentence('took off 3 nT'), sentence('base.csv: a gap'), sentence('Done.'), sentence('')]).toEqual(['Took off 3 nT.', 'base.csv: a gap.', 'Done.', '']);
  });

  it('counts one and many rightly', () => {
    const one = { site, findings: { list: [{ ...content.findings!.list[0]! }], pairs: [], notes: [] } };
    expect(spaces(headline(one))).toBe('Of 1 record with a place, 1 is located.');
    expect(headline({ site })).toBe('');
  });
});

describe('html', () => {
  it('escapes values, keeps markup, joins lists, leaves out what is not there', () => {
    expect(html`<p title="${'a"b'}">${'<i>&\''}${html`<b>x</b>`}${['1', html`<br>`]}${null}${undefined}${false}${0}\u0007${'\u0007'}</p>`.markup)
      .toBe('<p title="a&quot;b">&lt;i&gt;&amp;&#39;<b>x</b>1<br>0\u0007</p>');
  });
});

describe('the map', () => {
  const frame = mapFrame(content);

  it('holds the parcel and what was found, in true proportion, north up', () => {
    for (const { x, y } of content.anomalies!.list) expect(frame.holds(x, y)).toBe(true);
    expect(frame.width / (frame.east - frame.west)).toBeCloseTo(frame.height / (frame.north - frame.south), 12);
    expect(frame.x(frame.west + 10) - frame.x(frame.west)).toBeCloseTo(frame.y(frame.north - 10) - frame.y(frame.north), 9);
    expect(frame.y(frame.north)).toBeLessThan(frame.y(frame.south));
  });

  it('leaves out a record that lies far off, rather than shrink to it', () => {
    const far = { ...content, records: { placed: [{ ...content.records!.placed[0]!, x: frame.east + 9000 }], unplaced: [] } };
    expect(mapFrame(far).scale).toBeGreaterThan(frame.scale * 0.99);
  });

  it('has ticks at round feet, inside', () => {
    const { east, north } = mapTicks(frame, content);
    for (const { at, value } of [...east, ...north]) {
      expect(value % 100).toBe(0);
      expect(value * (1200 / 3937)).toBeCloseTo(at, 6);
    }
    expect(east.length).toBeGreaterThan(3);
    expect(ticks(0, 10, { metresPerUnit: 1, wanted: 5 }).map(({ value }) => value)).toEqual([0, 2, 4, 6, 8, 10]);
    expect([roundStep(0.7), roundStep(1), roundStep(4.9), roundStep(50), roundStep(999)]).toEqual([0.5, 1, 2, 50, 500]);
  });

  it('turns true and magnetic north by convergence and declination', () => {
    const legend = (declinationDeg: number, convergenceDeg: number): string => mapLegend({ site: { ...site, mainField: { ...site.mainField, declinationDeg, convergenceDeg } } }, frame, null, 0).drawing.markup;
    const east = legend(-9.3, -1.3);
    expect([...east.matchAll(/<g transform="rotate\(([-\d.]+)\)"/g)].map(([, angle]) => Number(angle))).toEqual([-8, 1.3]);
    expect(east).toContain('true 1.3° E');
    expect(east).toContain('magnetic 8.0° W');
  });

  it('draws bars of the length that they say', () => {
    const markup = mapLegend(content, frame, null, 0).drawing.markup;
    const bars = [...markup.matchAll(/width="([\d.]+)" height="5"\/><text[^>]*>0<\/text><text[^>]*>([\d\u202f]+) (m|ft)</g)];
    expect(bars.map(([, , , unit]) => unit)).toEqual(['m', 'ft']);
    for (const [, half, value, unit] of bars) {
      expect(Math.abs(2 * Number(half) / frame.scale - Number(value!.replace('\u202f', '')) * (unit === 'm' ? 1 : 0.3048))).toBeLessThan(0.1);
    }
  });

  it('draws the walk within half a unit, and breaks it where the line or the place jumps', () => {
    const path = walkedPath(readings, frame);
    const walks = path.split('M').slice(1).map((walk) => walk.split('L').map((point) => point.split(' ').map(Number) as [number, number]));
    expect(walks.length).toBe(50);
    for (let i = 0; i < readings.count; i += 37) {
      const [px, py] = [frame.x(readings.x[i]!), frame.y(readings.y[i]!)];
      const nearest = Math.min(...walks[readings.line[i]!]!.slice(1).map(([bx, by], at) => {
        const [ax, ay] = walks[readings.line[i]!]![at]!;
        const along = Math.min(1, Math.max(0, ((px - ax) * (bx - ax) + (py - ay) * (by - ay)) / ((bx - ax) ** 2 + (by - ay) ** 2)));
        return Math.hypot(px - ax - along * (bx - ax), py - ay - along * (by - ay));
      }));
      expect(nearest).toBeLessThan(0.6);
    }
    const gone = { ...readings, x: readings.x.map((value, i) => (i >= 40 && i < 60 ? NaN : value)) };
    expect(walkedPath(gone, frame).split('M').length).toBe(walks.length + 2);
  });

  it('keeps labels off each other', () => {
    const labels = Array.from({ length: 12 }, (_, i) => ({ text: `37-04${10 + i}`, x: 200 + (i % 4) * 30, y: 200 + Math.floor(i / 4) * 30, className: 'label' }));
    const placed = placeLabels(labels, { left: 0, top: 0, right: 600, bottom: 600 });
    for (const [i, a] of placed.entries()) {
      for (const b of placed.slice(i + 1)) {
        const across = Math.min(a.left, b.left) + a.text.length * 6.6 - Math.max(a.left, b.left);
        const down = 13 - Math.abs(a.baseline - b.baseline);
        expect(across <= 0 || down <= 0 || across * down <= 16, `${a.text} ${b.text}`).toBe(true);
      }
    }
  });
});

describe('the colours', () => {
  it('span the residual evenly about zero, with named values between', () => {
    const range = residualRange(residual, content.anomalies!.noise)!;
    expect(range.low).toBe(-range.high);
    expect(range.knee).toBeCloseTo(Math.hypot(1.1, 3.4), 9);
    const values = legendValues(range);
    expect(values).toEqual(values.toSorted((a, b) => a - b));
    expect(values).toContain(0);
    expect(values.at(-1)).toBe(range.high);
    for (const wide of [range, { low: -3e14, high: 3e14, knee: 5 }, { low: -3, high: 3, knee: 1 }]) {
      const places = legendValues(wide).map((value) => rampPlace(wide, value));
      for (let i = 1; i < places.length; i += 1) expect(places[i]! - places[i - 1]!).toBeGreaterThan(0.06);
    }
  });

  it('are null for a grid without values, and finite for one that is flat', () => {
    expect(residualRange({ ...residual, values: residual.values.map(() => NaN) })).toBeNull();
    expect(residualRange({ ...residual, values: residual.values.map(() => 0) })).toEqual({ low: -0.3, high: 0.3, knee: 0.1 });
  });

  // Source: WCAG 2.2, success criterion 1.4.3 and its definitions of relative luminance and contrast ratio.
  it.each([['light', 0], ['dark', 1], ['print', 2]] as const)('have a contrast of at least 4.5 to 1 on %s ground', (_, index) => {
    const sets = [...STYLE.markup.matchAll(/:root\{([^}]*)\}/g)].map(([, text]) => Object.fromEntries([...text!.matchAll(/--([a-z]+):#([0-9a-f]{3,6})/g)].map(([, key, hex]) => [key!, hex!.length === 3 ? [...hex!].map((digit) => digit + digit).join('') : hex!])));
    const set = sets[index]!;
    const luminance = (hex: string): number => [0.2126, 0.7152, 0.0722].reduce((sum, weight, i) => {
      const channel = Number.parseInt(hex.slice(2 * i, 2 * i + 2), 16) / 255;
      return sum + weight * (channel <= 0.04045 ? channel / 12.92 : ((channel + 0.055) / 1.055) ** 2.4);
    }, 0);
    for (const [text, ground] of [['ink', 'paper'], ['ink', 'panel'], ['soft', 'paper'], ['soft', 'panel'], ['mark', 'paper'], ['warn', 'warnpale'], ['ink', 'warnpale']] as const) {
      const [a, b] = [luminance(set[text]!), luminance(set[ground]!)];
      expect((Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05), `${text} on ${ground}`).toBeGreaterThanOrEqual(4.5);
    }
  });
});
