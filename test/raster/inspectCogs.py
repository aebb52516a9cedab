"""Looks at many COGs in one process, as Debian's GDAL sees them: one line of JSON a file.

For each NAME.tif in the folder: what Debian's validator says with its full check, place, CRS, metadata, statistics that
GDAL computes itself, whether the cells equal NAME.bin (row by row, of the file's own sample type), and the largest
difference between the file's overviews and those that GDAL makes of the cells by `average`.
"""
import glob
import json
import os
import sys

import numpy
from osgeo import gdal
from osgeo_utils.samples.validate_cloud_optimized_geotiff import validate

gdal.UseExceptions()


def apart(ours, theirs):
    """Largest difference of two arrays; infinite where only one of them has a value."""
    if ours.shape != theirs.shape or (numpy.isnan(ours) != numpy.isnan(theirs)).any():
        return float("inf")
    valid = ~numpy.isnan(ours)
    return float(numpy.abs(ours - theirs)[valid].max()) if valid.any() else 0.0


def cells(band):
    values = band.ReadAsArray().astype("f8")
    nodata = band.GetNoDataValue()
    if nodata is not None and nodata == nodata:
        values[values == nodata] = numpy.nan
    return values


def inspect(path):
    messages = []
    gdal.PushErrorHandler(lambda level, number, text: messages.append(text))
    dataset = gdal.Open(path)
    errors = validate(dataset, full_check=True)[1]
    band = dataset.GetRasterBand(1)
    raw = band.ReadAsArray()
    wanted = numpy.fromfile(path[:-4] + ".bin", raw.dtype).reshape(raw.shape)
    valid = cells(band)
    valid = valid[~numpy.isnan(valid)]
    # As gdaladdo does it on a plain GeoTIFF: each overview from the one before.
    copy = gdal.GetDriverByName("GTiff").CreateCopy("/vsimem/copy.tif", dataset)
    count = band.GetOverviewCount()
    if count:
        copy.BuildOverviews("AVERAGE", [2 << i for i in range(count)])
    system = dataset.GetSpatialRef()
    statistics = band.GetMetadata()
    gdal.PopErrorHandler()
    seen = {
        "name": os.path.basename(path)[:-4],
        "errors": errors,
        "messages": messages,
        "size": [dataset.RasterXSize, dataset.RasterYSize],
        "transform": list(dataset.GetGeoTransform()),
        "epsg": int(system.GetAuthorityCode(None)),
        "metresPerUnit": system.GetLinearUnits() if system.IsProjected() else 1,
        "area": dataset.GetMetadataItem("AREA_OR_POINT"),
        "layout": dataset.GetMetadataItem("LAYOUT", "IMAGE_STRUCTURE"),
        "compression": dataset.GetMetadataItem("COMPRESSION", "IMAGE_STRUCTURE"),
        "type": gdal.GetDataTypeName(band.DataType),
        "nodata": str(band.GetNoDataValue()),
        "unit": band.GetUnitType(),
        "description": band.GetDescription(),
        "scale": band.GetScale(),
        "offset": band.GetOffset(),
        "stated": {key: float(statistics[key]) for key in statistics if key.startswith("STATISTICS_")},
        "computed": {
            "STATISTICS_MINIMUM": float(valid.min()), "STATISTICS_MAXIMUM": float(valid.max()), "STATISTICS_MEAN": float(valid.mean()),
            "STATISTICS_STDDEV": float(valid.std()), "STATISTICS_VALID_PERCENT": 100.0 * valid.size / raw.size,
        } if valid.size else {},
        "cellsEqual": bool(numpy.array_equal(raw, wanted, equal_nan=raw.dtype.kind == "f")),
        "overviews": [[band.GetOverview(i).XSize, band.GetOverview(i).YSize] for i in range(count)],
        "overviewsApart": [apart(cells(band.GetOverview(i)), cells(copy.GetRasterBand(1).GetOverview(i))) for i in range(count)],
    }
    copy = None
    gdal.Unlink("/vsimem/copy.tif")
    return seen


def main(folder):
    for path in sorted(glob.glob(os.path.join(folder, "*.tif"))):
        print(json.dumps(inspect(path)), flush=True)


main(sys.argv[1])
