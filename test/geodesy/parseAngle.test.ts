import { describe, expect, it } from 'vitest';
import { UserError } from '../../src/errors.js';
import { parseAngle, type Axis } from '../../src/geodesy/parseAngle.js';

const S = 1 / 3600;

describe('parseAngle', () => {
  it.each<[string, Axis, number, number]>([
    ['39.3000', 'latitude', 39.3, 1e-4],
    ['+39.3', 'latitude', 39.3, 0.1],
    ['39', 'latitude', 39, 1],
    ['-80.20', 'longitude', -80.2, 0.01],
    ['\u221280.20', 'longitude', -80.2, 0.01],
    ['80.2 W', 'longitude', -80.2, 0.1],
    ['W 80.2', 'longitude', -80.2, 0.1],
    ['W80.2°', 'longitude', -80.2, 0.1],
    ['80.2', 'longitude', 80.2, 0.1],
    ['33.5 s', 'latitude', -33.5, 0.1],
    ['40°26\'46"', 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['40°26\'46" N', 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['40º26’46.5” N', 'latitude', 40 + 26 / 60 + 46.5 * S, S / 10],
    ['40° 26′ 46.50″ N', 'latitude', 40 + 26 / 60 + 46.5 * S, S / 100],
    ["40°26'46''N", 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['40-26-46', 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['-79-58-56', 'longitude', -(79 + 58 / 60 + 56 * S), S],
    ['79:58:56 W', 'longitude', -(79 + 58 / 60 + 56 * S), S],
    ['79 58 56 West', 'longitude', -(79 + 58 / 60 + 56 * S), S],
    ['79d58m56sW', 'longitude', -(79 + 58 / 60 + 56 * S), S],
    ['79 deg 58 min 56 sec W', 'longitude', -(79 + 58 / 60 + 56 * S), S],
    ['79d58m56s', 'longitude', 79 + 58 / 60 + 56 * S, S],
    ['40d26m46s', 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['40D26M46S', 'latitude', 40 + 26 / 60 + 46 * S, S],
    ['40d26m46s S', 'latitude', -(40 + 26 / 60 + 46 * S), S],
    ['40d26m46sS', 'latitude', -(40 + 26 / 60 + 46 * S), S],
    ['40 26 46 S', 'latitude', -(40 + 26 / 60 + 46 * S), S],
    ['40d26min', 'latitude', 40 + 26 / 60, 1 / 60],
    ["40°26.767'N", 'latitude', 40 + 26.767 / 60, 1e-3 / 60],
    ['40 26', 'latitude', 40 + 26 / 60, 1 / 60],
    ['-0°30\'00"', 'latitude', -0.5, S],
    ['90', 'latitude', 90, 1],
    ['180 W', 'longitude', -180, 1],
    ['0', 'longitude', 0, 1],
  ])('reads %s as a %s', (text, axis, deg, resolutionDeg) => {
    const angle = parseAngle(text, axis, 'permits.csv, row 2, column lat');
    expect(angle.deg).toBeCloseTo(deg, 12);
    expect(angle.resolutionDeg).toBeCloseTo(resolutionDeg, 15);
  });

  it.each<[string, Axis]>([
    ['', 'latitude'], ['n/a', 'latitude'], ['39,3', 'latitude'], ['39.3.1', 'latitude'], ['1e2', 'longitude'],
    ['-39.3 N', 'latitude'], ['-80.2W', 'longitude'], ['N 39.3 N', 'latitude'],
    ['39.3 N', 'longitude'], ['80.2 W', 'latitude'],
    ['40.5 26 46', 'latitude'], ['40 26.5 46', 'latitude'],
    ['40 60 00', 'latitude'], ["40°26'60\"", 'latitude'],
    ['91', 'latitude'], ["90°00'01\"", 'latitude'], ['181', 'longitude'], ['279.8', 'longitude'], ['402646', 'latitude'],
    ['40 26 46 12', 'latitude'], ['40"26', 'latitude'], ['NaN', 'latitude'], ['Infinity', 'latitude'], ['.', 'latitude'],
    ['40 26 46 s', 'latitude'], ['40d26m46 S', 'latitude'],
    ['40 26 46 N 80 12 00 W', 'latitude'],
  ])('refuses %s as a %s', (text, axis) => {
    let thrown: unknown;
    try { parseAngle(text, axis, 'permits.csv, row 2, column x'); } catch (error) { thrown = error; }
    expect(thrown).toBeInstanceOf(UserError);
    expect((thrown as UserError).code).toBe('position_invalid');
    expect((thrown as UserError).message).toContain('permits.csv, row 2, column x');
  });
});
