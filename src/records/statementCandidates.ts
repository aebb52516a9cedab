import { ELLIPSOIDS, metresPerDegree } from '../geodesy/ellipsoid.js';
import { placeFromMapCorner } from '../geodesy/sections/placeFromMapCorner.js';
import type { Crs } from '../geodesy/types.js';
import type { GeographicStatement, MapCornerStatement, ProjectedStatement } from './locationText/types.js';
import type { Candidate } from './placeCoordinates.js';
import { projectedReading } from './projectedCrs.js';
import type { DatumWeights } from './recordDatum.js';

/** Coordinates of a text on each datum that they may be in. `extraSdM` is the error of what the text leaves open, per axis. */
export interface StatedCandidates {
  readonly candidates: readonly Candidate[];
  readonly extraSdM: number;
}

/**
 * Coordinates that a text states, one candidate a datum: a zone is another system on each, and the distances from a map's
 * corner are laid off on each datum's ellipsoid. Throws UserError where the text's system or unit cannot be told.
 */
export function statementCandidates(
  statement: GeographicStatement | ProjectedStatement | MapCornerStatement,
  datums: DatumWeights,
  { fileCrs, where }: { readonly fileCrs: Crs | null; readonly where: string },
): StatedCandidates {
  let extraSdM = 0;
  const candidates = datums.map(({ datum, weight }): Candidate => {
    if (statement.kind === 'projected') {
      const { crs, metresPerUnit } = projectedReading(statement, datum, { fileCrs, where });
      return {
        datum, weight, crs, unitM: metresPerUnit, place: {
          kind: 'projected', eastM: statement.easting * metresPerUnit, northM: statement.northing * metresPerUnit,
          eastResolutionM: statement.eastingResolution * metresPerUnit, northResolutionM: statement.northingResolution * metresPerUnit,
        },
      };
    }
    if (statement.kind === 'geographic') {
      const { lonDeg, latDeg, lonResolutionDeg, latResolutionDeg } = statement;
      return { datum, weight, crs: null, place: { kind: 'angles', lonDeg, latDeg, lonResolutionDeg, latResolutionDeg } };
    }
    const ellipsoid = ELLIPSOIDS[datum];
    const { northM, eastM } = statement;
    const found = placeFromMapCorner(statement, { [northM < 0 ? 'southM' : 'northM']: Math.abs(northM), [eastM < 0 ? 'westM' : 'eastM']: Math.abs(eastM) }, { ellipsoid, where });
    const { lonM, latM } = metresPerDegree(ellipsoid, found.latDeg);
    extraSdM = Math.max(extraSdM, found.readingEastM, found.readingNorthM);
    return {
      datum, weight, crs: null, place: {
        kind: 'angles', lonDeg: found.lonDeg, latDeg: found.latDeg,
        lonResolutionDeg: statement.eastResolutionM / lonM, latResolutionDeg: statement.northResolutionM / latM,
      },
    };
  });
  return { candidates, extraSdM };
}
