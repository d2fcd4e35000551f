"""Opens a data package with zipfile, pandas, NumPy and h5py and prints what it finds as JSON.

Used by tests/jobs/exports/package.test.ts: python3 read_package.py PACKAGE.zip FOLDER
"""

import hashlib
import json
import sys
import zipfile

import h5py
import numpy
import pandas

path, folder = sys.argv[1:3]
archive = zipfile.ZipFile(path)
assert archive.testzip() is None, "a CRC-32 is wrong"
archive.extractall(folder)

sums = {}
for line in open(f"{folder}/checksums.sha256"):
    digest, name = line.rstrip("\n").split("  ", 1)
    sums[name] = hashlib.sha256(open(f"{folder}/{name}", "rb").read()).hexdigest() == digest


def listed(values):
    values = numpy.asarray(values)
    if values.dtype.kind in "SOU":
        return [v.decode() if isinstance(v, bytes) else str(v) for v in values]
    return [None if v != v else v for v in values.astype(float).tolist()]


base = f"{folder}/analysis-001"
out = {
    "names": archive.namelist(),
    "times": sorted({str(info.date_time) for info in archive.infolist()}),
    "sums": sums,
    "tables": {},
}
for table in ("tracks", "velocities", "estimates"):
    csv = pandas.read_csv(f"{base}/{table}.csv")
    npz = numpy.load(f"{base}/{table}.npz")
    h5 = h5py.File(f"{base}/{table}.h5", "r")
    columns = [str(name) for name in npz["columns"]]
    out["tables"][table] = {
        "csv_columns": list(csv.columns),
        "csv_rows": len(csv),
        "columns": columns,
        "npz_units": [str(unit) for unit in npz["units"]],
        "h5_units": [str(h5[name].attrs["unit"]) for name in columns],
        "h5_dtypes": [str(h5[name].dtype) for name in columns],
        "npz": {name: listed(npz[name]) for name in columns},
        "h5": {name: listed(h5[name][:]) for name in columns},
        "csv": {
            name: [None if pandas.isna(v) else v for v in csv[name].tolist()] for name in csv.columns
        },
    }
print(json.dumps(out))
