"""Every kind of bad input: one message that says what, where and how to mend it; nothing read."""

from __future__ import annotations

import pickle
from pathlib import Path

import pytest

from aero.errors import InputError
from aero.trajectory import READERS, read_trajectory, write_trajectory

HEAD = "time_s,altitude_km,speed_m_s\n"
GOOD = "0,100,7000\n1,99,7001\n"
SKIP = "or pass --skip-bad-rows."

# what -> (file name, content, the whole message after the file's name)
ROWS = {
    "text": (HEAD + "0,100,7000\n1,n/a,7000\n2,1,1\n",
             ", line 3: column 'altitude_km' holds 'n/a', expected a number; mend the row " + SKIP),
    "nan": (HEAD + "0,100,7000\n1,99,NaN\n2,1,1\n",
            ", line 3: column 'speed_m_s' holds 'NaN', expected a number; mend the row " + SKIP),
    "infinite": (HEAD + "0,100,7000\n1,-inf,7000\n",
                 ", line 3: column 'altitude_km' holds '-inf', expected a number; mend the row " + SKIP),
    "empty cell": (HEAD + "0,100,7000\n\n1,,7000\n2,,7000\n",
                   ", line 4: column 'altitude_km' is empty, expected an altitude from -5 to 1000 km "
                   "(1 more bad row after it); mend the row " + SKIP),
    "decimal comma": ("time_s;altitude_km;speed_m_s\n0;100,5;7000\n1;99;7000\n",
                      ", line 2: column 'altitude_km' holds '100,5', expected a number; "
                      "write it with a decimal point " + SKIP),
    "thousands mark": (HEAD + "0,100,7_000\n1,99,7000\n",
                       ", line 2: column 'speed_m_s' holds '7_000', expected a number; mend the row " + SKIP),
    "too few fields": (HEAD + "0,100,7000\n1,99\n",
                       ", line 3: has 2 fields, expected 3 as in the header; mend the row " + SKIP),
    "too many fields": (HEAD + "0,100,7000\n1,99,1,2\n",
                        ", line 3: has 4 fields, expected 3 as in the header; mend the row " + SKIP),
    "comment among rows": (HEAD + "0,100,7000\n# then\n1,99,7000\n",
                           ", line 3: is a '#' line among the rows, expected above the header; "
                           "mend the row " + SKIP),
    "repeated time": (HEAD + "0,100,7000\n0.0,99,7000\n",
                      ", line 3: column 'time_s' holds '0.0', which repeats '0' of line 2, "
                      "expected increasing times; remove one of the rows " + SKIP),
    "unsorted times": (HEAD + "0,100,7000\n2,99,7000\n1,98,7000\n",
                       ", line 4: column 'time_s' holds '1', which goes back from '2' of line 3, "
                       "expected increasing times; sort the rows by time " + SKIP),
    "above 1000 km": (HEAD + "0,100,7000\n1,1000.001,7000\n",
                      ", line 3: column 'altitude_km' holds '1000.001', "
                      "expected an altitude from -5 to 1000 km; mend the row " + SKIP),
    "below -5 km": (HEAD + "0,-5.001,7000\n1,10,7000\n",
                    ", line 2: column 'altitude_km' holds '-5.001', "
                    "expected an altitude from -5 to 1000 km; mend the row " + SKIP),
    "negative speed": (HEAD + "0,100,7000\n1,10,-0.1\n",
                       ", line 3: column 'speed_m_s' holds '-0.1', "
                       "expected a speed from 0 to 100 km/s; mend the row " + SKIP),
    "latitude": (HEAD.strip() + ",lat_deg\n0,100,7000,90\n1,100,7000,90.1\n",
                 ", line 3: column 'lat_deg' holds '90.1', expected a latitude from -90 to 90 deg; "
                 "mend the row " + SKIP),
    "longitude": (HEAD.strip() + ",lon_deg\n0,100,7000,-180\n1,100,7000,-180.1\n",
                  ", line 3: column 'lon_deg' holds '-180.1', expected a longitude from -180 to 360 deg; "
                  "mend the row " + SKIP),
    "flight-path angle": (HEAD.strip() + ",flight-path angle [deg]\n0,100,7000,-91\n1,100,7000,-90\n",
                          ", line 2: column 'flight-path angle [deg]' holds '-91', "
                          "expected a flight-path angle from -90 to 90 deg; mend the row " + SKIP),
    "cold wall": (HEAD.strip() + ",wall temperature [K]\n0,100,7000,0\n1,100,7000,300\n",
                  ", line 2: column 'wall temperature [K]' holds '0', "
                  "expected a wall temperature from 1 to 10000 K; mend the row " + SKIP),
    # the pole lies 6378137 - 6356752.3142 = 21384.6858 m under the sphere
    "geocentric altitude": ("# latitude: 90 deg\n# altitude kind: geocentric\n" + HEAD + "0,0,7000\n1,-27,7000\n",
                            ", line 5: column 'altitude_km' holds '-27', which is -5.61531 km geodetic, "
                            "expected an altitude from -5 to 1000 km; mend the row " + SKIP),
    "no date": ("utc,altitude_km,speed_m_s\n2026-01-01T00:00:00Z,1,2\n2026-13-01,2,3\n",
                ", line 3: column 'utc' holds '2026-13-01', "
                "expected a UTC date in ISO 8601 such as '2026-03-01T12:00:00Z'; mend the row " + SKIP),
    "another time zone": ("time,altitude_km,speed_m_s\n2026-01-01T00:00:00+05:00,1,2\n2026-01-02,2,3\n",
                          ", line 2: column 'time' holds '2026-01-01T00:00:00+05:00', "
                          "expected a UTC date in ISO 8601 such as '2026-03-01T12:00:00Z'; mend the row " + SKIP),
}  # fmt: skip

LENGTHS = "m, km, cm, mm, um, ft, kft, in, mi, nmi"
FILES = {
    "bare altitude": ("a.csv", "time_s,altitude,speed_m_s\n0,1,2\n1,2,3\n",
                      ", line 1: column 'altitude' states no unit, expected one of length in brackets or as a "
                      f"suffix, such as 'altitude [m]'; use one of: {LENGTHS}."),
    "bare angle": ("a.csv", "altitude_m,speed_m_s,heading\n1,2,3\n2,3,4\n",
                   ", line 1: column 'heading' states no unit, expected one of angle in brackets or as a "
                   "suffix, such as 'heading [deg]'; use one of: deg, rad, mrad."),
    "bare time": ("a.csv", "time,altitude_m,speed_m_s\n0,1,2\n1,2,3\n",
                  ", line 1: column 'time' states no unit, expected one of time in brackets or as a suffix, "
                  "such as 'time [s]', or dates in ISO 8601 such as '2026-03-01T12:00:00Z'; "
                  "use one of: s, ms, min, h, d, days, yr."),
    "unit of another kind": ("a.csv", "time_s,altitude [kg],speed_m_s\n0,1,2\n1,2,3\n",
                             ", line 1: column 'altitude [kg]' states 'kg', which is not a unit of length; "
                             f"use one of: {LENGTHS}."),
    "two of one meaning": ("a.csv", "time_s,altitude_km,alt [m],speed_m_s\n0,1,1,2\n1,2,1,3\n",
                           ", line 1: columns 'altitude_km' and 'alt [m]' both give the altitude; "
                           "keep one, or rename the other."),
    "two of one name": ("a.csv", HEAD.strip() + ",mode,mode\n0,1,2,3,4\n1,2,3,4,5\n",
                        ", line 1: two columns are named 'mode'; rename or remove one."),
    "a column without a name": ("a.csv", HEAD.strip() + ",\n0,1,2,\n1,2,3,x\n",
                                ", line 1: column 4 has values and no name; name it."),
    "no altitude": ("a.csv", "time_s,altitud_km,speed_m_s\n0,1,2\n1,2,3\n",
                    ", line 1: no column gives the altitude, expected one such as 'altitude_m' or "
                    "'altitude [m]' among 'time_s', 'altitud_km', 'speed_m_s'; did you mean 'altitude'?"),
    "no header": ("a.csv", "0,1,2\n1,2,3\n",
                  ", line 1: the first line holds numbers ('0,1,2'), expected a header; "
                  "add a line such as 'time_s,altitude_km,speed_m_s' above it."),
    "separated by blanks": ("a.csv", "time_s altitude_m speed_m_s\n0 1 2\n",
                            ", line 1: the header 'time_s altitude_m speed_m_s' is a single column, expected "
                            "columns separated by commas, tabs, semicolons; separate the columns so."),
    "an open quote": ("a.csv", HEAD + '0,100,"7000\n1,99,7000\n2,98,7000\n',
                      ", line 2: a row that begins here is not well formed (unexpected end of data); "
                      "close every quote, and double quotes inside quotes."),
    "empty": ("a.csv", "", ": is empty, expected a header and rows; give a trajectory."),
    "blank": ("a.csv", "\n \n", ": is empty, expected a header and rows; give a trajectory."),
    "metadata only": ("a.csv", "# epoch: 2026-01-01\n", ": has no header; give a header line and rows."),
    "header only": ("a.csv", "# epoch: 2026-01-01\n" + HEAD,
                    ", line 2: has a header and no rows, expected at least two rows; give the rows."),
    "one point": ("a.csv", HEAD + "0,1,2\n\n",
                  ": holds 1 point, expected at least 2; give the whole trajectory."),
    "binary": ("a.csv", bytes(range(256)), ": is binary, expected text; give a CSV, TSV or Parquet file."),
    "another encoding": ("a.csv", "time_s,altitude_km,speed_m_s,wall temperature [°C]\n".encode("latin-1"),
                         ", line 1: holds the byte 0xb0, which is not UTF-8; save it as CSV in UTF-8."),
    "sixteen bits": ("a.csv", (HEAD + GOOD).encode("utf-16"),
                     ": is UTF-16 text, expected UTF-8; save it as CSV in UTF-8."),
    "misspelt key": ("a.csv", "# velocty frame: inertial\n" + HEAD + GOOD,
                     ", line 1: metadata key 'velocty frame' is not known; "
                     "did you mean 'velocity frame' (as in '# velocity frame: inertial')?"),
    "key by another word": ("a.csv", "# start date: 2026-01-01\n" + HEAD + GOOD,
                            ", line 1: metadata key 'start date' is not known; "
                            "did you mean 'epoch' (as in '# epoch: 2026-03-01T12:00:00Z')?"),
    "unknown frame": ("a.csv", "# velocity frame: moon\n" + HEAD + GOOD,
                      ", line 1: metadata key 'velocity frame' is 'moon', expected one of: air, inertial."),
    "epoch": ("a.csv", "\n# epoch: yesterday\n" + HEAD + GOOD,
              ", line 2, metadata key 'epoch': 'yesterday' is not a UTC date, "
              "expected ISO 8601 such as '2026-03-01T12:00:00Z'."),
    "key twice": ("a.csv", "# epoch: 2026-01-01\n# epoch: 2026-01-01\n" + HEAD + GOOD,
                  ", line 2: metadata key 'epoch' stands twice; keep one."),
    "key without value": ("a.csv", "# heading:\n" + HEAD + GOOD,
                          ", line 1: metadata key 'heading' has no value, expected one such as '45 deg'; "
                          "give the value or remove the line."),
    "fixed latitude": ("a.csv", "# latitude: 100 deg\n" + HEAD + GOOD,
                       ", line 1: metadata key 'latitude' is '100 deg', "
                       "expected a latitude from -90 to 90 deg; mend the value."),
    "fixed and column": ("a.csv", "# latitude: 1 deg\n" + HEAD.strip() + ",lat_deg\n0,1,2,3\n1,2,3,4\n",
                         ": the latitude is given by the metadata and by column 'lat_deg'; keep one."),
    "inertial, too little": ("a.csv", "# velocity frame: inertial\n# latitude: 10 deg\n" + HEAD + GOOD,
                             ": inertial speeds need latitude, flight-path angle, heading; "
                             "missing: flight-path angle, heading; add a column such as "
                             "'flight_path_angle_deg' or a line '# flight-path angle: 45 deg' above the header."),
    "geocentric, no latitude": ("a.csv", "# altitude kind: geocentric\n" + HEAD + GOOD,
                                ": geocentric altitudes need latitude; missing: latitude; add a column such as "
                                "'latitude_deg' or a line '# latitude: 45 deg' above the header."),
    "header against metadata": ("a.csv", "# velocity frame: inertial\naltitude_km,air_speed_m_s\n0,1\n1,2\n",
                                ": column 'air_speed_m_s' says air, but metadata key 'velocity frame' is "
                                "'inertial'; make them agree."),
    "ephemeris": ("a.oem", "CCSDS_OEM_VERS = 2.0\n",
                  f": is an orbit ephemeris (OEM); a survey reads {', '.join(READERS)}; give one of these."),
    "elements by content": ("a.txt", "CCSDS_OMM_VERS = 2.0\n",
                            ": is an orbit element set (OMM); a survey reads CSV, TSV, Parquet; "
                            "give one of these."),
    "two lines": ("a.txt", "BALL\n1 00005U 58002B   00179.78495062  .00000023  00000-0  28098-4 0  4753\n"
                  "2 00005  34.2682 348.7242 1859667 331.7664  19.3264 10.82419157413667\n",
                  ": is an orbit element set (TLE); a survey reads CSV, TSV, Parquet; give one of these."),
    "spreadsheet": ("a.xlsx", b"PK\x03\x04xyz",
                    ": is a spreadsheet or another archive; a survey reads CSV, TSV, Parquet; "
                    "give one of these."),
    "no Parquet": ("a.parquet", HEAD + GOOD,
                   ": is no Parquet file, though its name says so; write it again or rename it."),
}  # fmt: skip


def _message(path: Path, content: str | bytes) -> str:
    path.write_bytes(content if isinstance(content, bytes) else content.encode("utf-8"))
    with pytest.raises(InputError) as caught:
        read_trajectory(path)
    text = str(caught.value)
    assert text.startswith(str(path))
    # A worker that raises it must be able to hand it over whole.
    assert str(pickle.loads(pickle.dumps(caught.value))) == text
    return text.removeprefix(str(path))


@pytest.mark.parametrize("what", FILES)
def test_a_bad_file_gets_one_clear_message(what: str, tmp_path: Path) -> None:
    name, content, expected = FILES[what]
    assert _message(tmp_path / name, content) == expected


@pytest.mark.parametrize("what", ROWS)
def test_a_bad_row_gets_one_clear_message(what: str, tmp_path: Path) -> None:
    content, expected = ROWS[what]
    assert _message(tmp_path / "descent.csv", content) == expected


@pytest.mark.parametrize("what", ROWS)
def test_a_bad_row_can_be_skipped_and_is_listed(what: str, tmp_path: Path) -> None:
    content, expected = ROWS[what]
    rows = content.rstrip("\n").splitlines()
    # Two more good rows, so that enough are left; later than every other.
    late = ["2027-01-01T00:00:00Z", "2027-01-02T00:00:00Z"] if "2026-" in content else ["100", "101"]
    mark = ";" if ";" in content else ","
    others = [mark.join([time, "5", "5", *["45"] * (rows[-2].count(mark) - 2)]) for time in late]
    path = tmp_path / "descent.csv"
    path.write_text("\n".join(rows + others) + "\n", encoding="utf-8")
    flight = read_trajectory(path, skip_bad_rows=True)
    line_of_header = next(
        number for number, row in enumerate(rows, 1) if "altitude" in row and "#" not in row
    )
    blank = rows.count("")
    line = int(expected.split("line ")[1].split(":")[0])
    assert flight.skipped[0].line == line
    reason = expected.split(": ", 1)[1].rsplit(";", 1)[0].replace(" (1 more bad row after it)", "")
    assert flight.skipped[0].reason == reason
    assert any(f"rows were left out (first: line {line}: {reason})" in note for note in flight.notes)
    assert len(flight) == len(rows) + 2 - line_of_header - len(flight.skipped) - blank


def test_all_rows_bad_leaves_nothing_to_survey(tmp_path: Path) -> None:
    path = tmp_path / "a.csv"
    path.write_text(HEAD + "0,x,1\n1,x,1\n2,5,1\n", encoding="utf-8")
    with pytest.raises(
        InputError, match=r"holds 1 point after 2 bad rows were left out, expected at least 2; mend"
    ):
        read_trajectory(path, skip_bad_rows=True)


def test_a_missing_file_names_the_nearest(tmp_path: Path) -> None:
    (tmp_path / "descent.csv").write_text(HEAD + GOOD, encoding="utf-8")
    with pytest.raises(
        InputError, match=r"decent\.csv: there is no such file; did you mean 'descent\.csv'\?$"
    ):
        read_trajectory(tmp_path / "decent.csv")


def test_a_folder_is_no_file(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"is a folder, expected a file; name a file in it\.$"):
        read_trajectory(tmp_path)


def test_a_cut_parquet_file_says_so(tmp_path: Path) -> None:
    path = tmp_path / "a.parquet"
    path.write_bytes(b"PAR1 and no more")
    with pytest.raises(
        InputError, match=r"a\.parquet: is no readable Parquet file \(.*\); write it again\.$"
    ):
        read_trajectory(path)


def test_a_wrong_date_for_time_zero(tmp_path: Path) -> None:
    path = tmp_path / "a.csv"
    path.write_text(HEAD + GOOD, encoding="utf-8")
    with pytest.raises(InputError, match=r"^--date: 'soon' is not a UTC date"):
        read_trajectory(path, time_zero="soon")


def test_writing_refuses_what_it_cannot_do(tmp_path: Path) -> None:
    path = tmp_path / "a.csv"
    path.write_text(HEAD + GOOD, encoding="utf-8")
    flight = read_trajectory(path)
    with pytest.raises(InputError, match=r"exists already; name another file or pass --replace\.$"):
        write_trajectory(flight, path)
    with pytest.raises(
        InputError, match=r"ends in '\.txt', expected one of: \.csv, \.tsv, \.parquet; rename"
    ):
        write_trajectory(flight, tmp_path / "a.txt")
    with pytest.raises(InputError, match=r"its folder does not exist; make it first\.$"):
        write_trajectory(flight, tmp_path / "no" / "a.csv")
    (tmp_path / "b.csv").mkdir()
    with pytest.raises(InputError, match=r"is a folder, expected a file"):
        write_trajectory(flight, tmp_path / "b.csv", replace=True)
    assert sorted(entry.name for entry in tmp_path.iterdir()) == ["a.csv", "b.csv"]
