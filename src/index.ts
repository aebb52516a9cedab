/** The public API. Positions are metres in the survey's frame; see the types for units. */
export { UserError, type Complaint, type ComplaintCode } from './errors.js';
export { quantity, US_SURVEY_FOOT_M, FOOT_M, type QuantityUnit } from './units.js';
export type { FileSource } from './files.js';
export { VERSION } from './version.js';

export { crs, crsCodes } from './geodesy/crs.js';
export { crsFromWkt } from './geodesy/crsFromWkt.js';
export { wktOf } from './geodesy/wktOf.js';
export { datumShift, DATUM_DEFAULTS, type DatumSetting } from './geodesy/datumShift.js';
export { readShiftGrid, type ShiftGrid } from './geodesy/shiftGrid.js';
export { CONUS } from './geodesy/conus.js';
export { areaOfUseWarning } from './geodesy/areaOfUse.js';
export { convergenceDeg, pointScale } from './geodesy/convergence.js';
export { decimalYear } from './geodesy/decimalYear.js';
export { parseAngle } from './geodesy/parseAngle.js';
export type { Bounds, Crs, Datum, DatumShift, ShiftedPlace } from './geodesy/types.js';

export { parseCsv } from './table/parseCsv.js';
export { NumberReader, readNumberColumns } from './table/numberReader.js';
export { writeCsv, type CsvColumn } from './table/writeCsv.js';
export type { TextTable } from './table/types.js';

export { encodeFlatGeobuf } from './vector/encodeFlatGeobuf.js';
export { encodeGeoJson } from './vector/encodeGeoJson.js';
export { encodeGeoPackage } from './vector/encodeGeoPackage.js';
export { encodeGpx } from './vector/encodeGpx.js';
export { encodeShapefile } from './vector/encodeShapefile.js';
export { readVector } from './vector/readVector.js';
export type { Feature, Field, FieldType, FieldValue, Layer, VectorInput } from './vector/types.js';

export { encodeCog, COG_DEFAULTS, type CogOptions, type Deflate } from './raster/encodeCog.js';
export { writeCog } from './raster/writeCog.js';
export { openGeoTiff } from './raster/openGeoTiff.js';
export { httpSource } from './raster/httpSource.js';
export { memoryScratch, memorySink, memorySource, type ByteScratch, type ByteSink, type ByteSource } from './raster/byteStores.js';
export { checkCog } from './raster/checkCog.js';
export { readGeoTiff } from './raster/readGeoTiff.js';
export { sldStyle } from './raster/sldStyle.js';
export type { Grid, GridPlace, RowSource } from './raster/types.js';

export { mainFieldAt, mainFieldInFrame, MAIN_FIELD_YEARS } from './field/mainField.js';
export { casingSteel, listedCasings, poleFromCasing } from './field/casing.js';
export type { MainField } from './field/types.js';

export { ellipse95, ellipseRing } from './density/ellipse.js';
export { expectation } from './density/expectation.js';
export { region95 } from './density/region95.js';
export { massIn } from './density/massIn.js';
export type { Area, Covariance, Density, DensityPart, Ellipse, Rings } from './density/types.js';

export { detectionGrid, DETECTION_GRID_DEFAULTS } from './detection/detectionGrid.js';
export { detectionChance } from './detection/detector.js';
export type { NoiseModel, Target } from './detection/types.js';

export { makeSite, SITE_DEFAULTS, type SiteSettings } from './site/makeSite.js';
export { clipAreas } from './site/clipAreas.js';
export type { Site } from './site/types.js';

export { parseApiNumber } from './records/apiNumber.js';
export { parseLocation } from './records/locationText/parseLocation.js';
export { locateInBatches, locateRecords, LOCATE_DEFAULTS } from './records/locateRecords.js';
export type { Records, UnplacedRecord, WellRecord } from './records/types.js';
export { planSurvey, PLAN_DEFAULTS } from './plan/planSurvey.js';
export type { PlanLine, SurveyPlan } from './plan/types.js';
export { reduceReadings } from './readings/reduceReadings.js';
export type { Readings, ReductionStep } from './readings/types.js';
export { gridByMethod, METHOD_DEFAULTS } from './grid/gridByMethod.js';
export { gridByTriangles } from './grid/gridByTriangles.js';
export { gridReadings } from './grid/gridReadings.js';
export { gridTiled, type TiledGrid, type TiledOptions } from './grid/gridTiled.js';
export { lineErrors, type LineErrors } from './grid/lineErrors.js';
export { solveTile, type SolveTile, type TileSolution, type TileTask } from './grid/solveTile.js';
export { streamByMethod } from './grid/streamByMethod.js';
export type { GridRemarks, GridResult } from './grid/types.js';
export { delineate } from './anomalies/delineate.js';
export type { Anomalies, Anomaly, AnomalyClass } from './anomalies/types.js';
export { reconcile } from './findings/reconcile.js';
export type { Finding, Findings, FindingWord, PairChance } from './findings/types.js';

export { buildReport } from './report/buildReport.js';
export { simulateFieldDay } from './simulation/simulateFieldDay.js';
export { SCENARIO_SCHEMA } from './simulation/scenarioSchema.js';

export { BUILT_IN_OPERATIONS } from './operations/index.js';
export { checkOperation } from './operations/checkOperation.js';
export { processDescription } from './operations/processDescription.js';
export { objectSchema, pathSchema, publicSchema, quantitySchema, rangeSchema } from './operations/schema.js';
export type { GridOutput, ObjectSchema, Operation, Schema, Slot, StreamedGrid, Task } from './operations/types.js';

export { checkDelivery } from './survey/checkDelivery.js';
export { checkSurvey } from './survey/checkSurvey.js';
export { deliverRun, type Delivery } from './survey/deliverRun.js';
export { tracing, type FileDigest, type Host, type HostFiles, type Spool, type SpooledFile } from './survey/host.js';
export { readSurvey, surveyFrom, type Survey } from './survey/readSurvey.js';
export { runSurvey, type RunOptions, type RunResult } from './survey/runSurvey.js';
export { summarise, type RunSummary } from './survey/summarise.js';
export { publishedSurveySchema } from './survey/surveySchema.js';
