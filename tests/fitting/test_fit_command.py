"""``pipeflow fit``: sheets that are read, sheets refused with the place and the reason, the document, the page."""

from __future__ import annotations

import json
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest
from typer.testing import CliRunner, Result

from pipeflow.cli import app

CASES = Path(__file__).parents[2] / "cases"
HEADER = "shear_rate [1/s],shear_stress [Pa]\n"
ROWS = "5,11.2\n10,11.9\n20,13.0\n40,14.6\n80,17.4\n150,21.0\n250,25.0\n400,29.6\n"
KEYS = {
    "newtonian": {"viscosity_Pa_s"},
    "power-law": {"consistency_Pa_sn", "flow_index"},
    "bingham": {"yield_stress_Pa", "plastic_viscosity_Pa_s"},
    "herschel-bulkley": {"yield_stress_Pa", "consistency_Pa_sn", "flow_index"},
    "casson": {"yield_stress_Pa", "casson_viscosity_Pa_s"},
}


def fit(tmp_path: Path, content: str | bytes, *options: str) -> Result:
    sheet = tmp_path / "sheet.csv"
    sheet.write_bytes(content if isinstance(content, bytes) else content.encode())
    return CliRunner().invoke(app, ["fit", str(sheet), *options])


def document(tmp_path: Path, content: str, *options: str) -> dict:  # type: ignore[type-arg]
    result = fit(tmp_path, content, "--json", *options)
    assert result.exit_code == 0, result.stderr
    assert result.stdout.count("\n") == 1
    return json.loads(result.stdout)


def test_document_has_the_keys_of_the_case_file_page(tmp_path: Path) -> None:
    found = document(tmp_path, HEADER + ROWS)
    assert {model["model"]: set(model["parameters"]) for model in found["models"]} == KEYS
    for model in found["models"]:
        assert set(model["standard_errors"]) == KEYS[model["model"]]
        assert all(isinstance(model[key], float) for key in ("rmse_Pa", "r_squared", "aicc"))
        assert np.shape(model["covariance"]) == (len(KEYS[model["model"]]),) * 2
    assert found["selected"] in KEYS
    assert found["tested_shear_rate_1_s"] == [5.0, 400.0]
    assert [point["line"] for point in found["points"]] == list(range(2, 10))


def test_a_model_without_parameters_has_the_reason(tmp_path: Path) -> None:
    found = document(tmp_path, HEADER + "10,12\n10,12.1\n100,20\n100,20.2\n1000,60\n1000,60.5\n")
    bulkley = found["models"][3]
    assert bulkley["parameters"] is None
    assert "3 parameters need" in bulkley["reason"]


@pytest.mark.parametrize("name", ["48", "52", "56"])
def test_demo_sheets_are_fitted_and_fit_eighty_columns(name: str) -> None:
    result = CliRunner().invoke(app, ["fit", str(CASES / f"thickener-underflow-{name}.csv")])
    assert result.exit_code == 0
    assert "herschel-bulkley: lowest AICc" in result.stdout
    assert max(map(len, result.stdout.splitlines())) <= 80
    assert "\x1b" not in result.stdout


def test_demo_sheets_give_back_the_fluids_they_were_invented_from() -> None:
    true = {"48": (5.0, 0.42, 0.60), "52": (9.5, 0.62, 0.58), "56": (16.5, 0.95, 0.56)}
    for name, values in true.items():
        result = CliRunner().invoke(app, ["fit", "--json", str(CASES / f"thickener-underflow-{name}.csv")])
        found = json.loads(result.stdout)["models"][3]["intervals_95"]
        for (low, high), value in zip(found.values(), values, strict=True):
            assert low <= value <= high


def test_readings_left_out_are_named_with_the_reason(tmp_path: Path) -> None:
    found = document(tmp_path, HEADER + ROWS, "--use", "10 .. 250 1/s")
    out = {point["line"]: point["left_out"] for point in found["points"] if not point["used"]}
    assert out == dict.fromkeys((2, 9), "outside the shear rates to be used, 10 .. 250 1/s")
    assert found["tested_shear_rate_1_s"] == [10.0, 250.0]
    page = fit(tmp_path, HEADER + ROWS, "--use", "10 .. 250 1/s").stdout
    assert "x left out: outside the shear rates to be used, 10 .. 250 1/s" in page


def test_options_are_taken(tmp_path: Path) -> None:
    assert document(tmp_path, HEADER + ROWS, "--model", "bingham")["selected"] == "bingham"
    assert document(tmp_path, HEADER + ROWS, "--robust")["robust"] is True
    assert document(tmp_path, HEADER + ROWS, "--error", "absolute")["error_model"] == "absolute"


@pytest.mark.parametrize(
    ("options", "words"),
    [
        (("--use", "300 .. 30 1/s"), "the lower end comes first"),
        (("--use", "30 .. 300"), "without a unit"),
        (("--use", "900 .. 1000 1/s"), "0 of 8 readings are left to fit, which run from 5 to 400 1/s"),
        (("--model", "oldroyd"), "accepted: newtonian, power-law"),
        (("--error", "log"), "accepted: relative, absolute"),
    ],
)
def test_options_that_cannot_be_used(tmp_path: Path, options: tuple[str, ...], words: str) -> None:
    result = fit(tmp_path, HEADER + ROWS, *options)
    assert result.exit_code == 2
    assert words in result.stderr
    assert result.stdout == ""


READ = {
    "byte order mark": "\ufeff" + HEADER + ROWS,
    "carriage returns": (HEADER + ROWS).replace("\n", "\r\n"),
    "semicolons": (HEADER + ROWS).replace(",", ";"),
    "tabs": (HEADER + ROWS).replace(",", "\t"),
    "semicolons and decimal commas": (HEADER + ROWS).replace(",", ";").replace(".", ","),
    "capitals and spaces": HEADER.replace("shear_rate", " Shear rate").replace("shear_stress", "Shear Stress ") + ROWS,
    "quotes": HEADER + "\n".join(f'"{row.replace(",", chr(34) + "," + chr(34))}"' for row in ROWS.split()),
    "blank lines and comments": "# sample: x\n#\n# no colon here\n\n" + HEADER + "\n" + ROWS + "\n# the end\n",
    "another unit": HEADER.replace("[Pa]", "[kPa]") + "\n".join(
        f"{row.split(',')[0]},{float(row.split(',')[1]) / 1000:.4f}" for row in ROWS.split()),
    "another column": "point," + HEADER + "\n".join(f"{n},{row}" for n, row in enumerate(ROWS.split())),
}  # fmt: skip


@pytest.mark.parametrize("name", READ)
def test_sheets_that_are_read_the_same(tmp_path: Path, name: str) -> None:
    plain, other = document(tmp_path, HEADER + ROWS), document(tmp_path, READ[name])
    for one, two in zip(plain["models"], other["models"], strict=True):
        assert two["parameters"] == pytest.approx(one["parameters"], rel=1e-9)


REFUSED: dict[str, tuple[str | bytes, list[str]]] = {
    "text in a column": (
        HEADER + "5,11.2\n10,abc\n20,\n40,14\n80,17\n",
        [":3:4  shear_stress  found 'abc'; a number is needed", ":4:4  shear_stress  no value; a number is needed"],
    ),
    "units in the rows": (
        HEADER + "5,11.2 Pa\n10,0.012 kPa\n20,13\n40,14\n",
        [
            ":2:3  shear_stress  found '11.2 Pa'; a bare number is needed, the unit stands in the header",
            ":3:4  shear_stress  found '0.012 kPa'",
        ],
    ),
    "a unit of something else": (
        HEADER.replace("Pa", "m") + ROWS,
        [":1:18  shear_stress  found the unit 'm'", "units that fit: Pa"],
    ),
    "no units": ("shear_rate,shear_stress\n" + ROWS, [":1:1  shear_rate  no unit", ":1:12  shear_stress  no unit"]),
    "zero and negative": (
        HEADER + "0,9\n-3,10\n" + ROWS + "7,-2\n8,0\n",
        [
            ":2:1  shear_rate  found '0'; must be above 0 (a stress at rest is a static_yield_stress",
            ":3:1  shear_rate  found '-3'",
            ":12:3  shear_stress  found '-2'; must be above 0",
            ":13:3  shear_stress  found '0'",
        ],
    ),
    "one point": (HEADER + "5,11\n", [":2  1 reading; at least 4 are needed"]),
    "no points": (HEADER, [":1  no rows below the header"]),
    "empty": ("", ["no header; the first row names the columns"]),
    "constant stress": (HEADER + "5,11\n10,11\n20,11\n40,11\n", [":1  shear_stress  the same in every row"]),
    "constant rate": (HEADER + "5,11\n5,12\n5,13\n5,11\n", [":1  shear_rate  the same in every row"]),
    "falling stress": (HEADER + "5,20\n10,15\n20,12\n40,9\n80,7\n", ["the stress does not rise with the shear rate"]),
    "a million rows": (HEADER + "5,11\n" * 1_000_000, ["larger than 2000 kB; a table is at most that"]),
    "many rows": (HEADER + "5,11\n" * 20_000, [":10002  more than 10000 rows"]),
    "decimal commas between commas": (
        HEADER + "5,0,11,2\n10,0,11,9\n",
        [":2  found 4 fields between commas, the header has 2; with a decimal comma, separate the fields"],
    ),
    "commas of two kinds": (
        HEADER.replace(",", ";") + "1,000.5;11.2\n2000;12,2\n3000;13.2\n4000;14\n",
        [
            ":2:1  shear_rate  found '1,000.5'; numbers have a decimal point and no thousands mark",
            ":3:6  shear_stress  found '12,2'",
        ],
    ),
    "commas that may be either": (
        HEADER.replace(",", ";") + "1,000;11\n2,000;12\n3,000;13\n4,000;14\n",
        [":2:1  found '1,000'; the comma may be a decimal or a thousands mark"],
    ),
    "another delimiter in the rows": (
        HEADER + "5;11.2\n10;11.9\n",
        [":2  found 1 fields between commas", "semicolons, which the header"],
    ),
    "ragged": (HEADER + "5,11,3\n6\n" + ROWS, [":2  found 3 fields", ":3  found 1 fields"]),
    "a column misspelt": (HEADER.replace("rate", "rat") + ROWS, [":1  shear_rat: did you mean shear_rate?"]),
    "a column twice": (
        "shear_rate [1/s]," + HEADER + "".join(f"1,{row}\n" for row in ROWS.split()),
        [":1:18  shear_rate  this column is there twice"],
    ),
    "a key misspelt": (
        "# temprature: 20 °C\n" + HEADER + ROWS,
        [":1:3  unknown key 'temprature'; did you mean temperature?"],
    ),
    "a key without unit": ("# density: 1420\n" + HEADER + ROWS, [":1:12  density  found '1420' without a unit"]),
    "solids of more than all": (
        "# solids: 52\n" + HEADER + ROWS,
        [":1:11  solids  found '52'; a fraction is needed"],
    ),
    "a tube without size": (
        "flow [mL/s],pressure_drop [kPa]\n1,10\n2,12\n3,14\n4,16\n5,18\n",
        [":1  diameter  missing; a column", ":1  length  missing"],
    ),
    "a bob larger than its cup": (
        "# bob_radius: 20 mm\n# cup_radius: 19 mm\n# height: 60 mm\nspeed [rpm],torque [mN.m]\n1,10\n2,12\n3,14\n",
        [":2:15  cup_radius  found '19 mm'; must be above the bob's radius"],
    ),
    "not a number": (
        HEADER + "nan,3\ninf,2\n1e999,4\n" + ROWS,
        [
            ":2:1  shear_rate  found 'nan'",
            ":3:1  shear_rate  found 'inf'",
            ":4:1  shear_rate  found '1e999'; the number is too large",
        ],
    ),
    "another encoding": (
        ("# temperature: 20 °C\n" + HEADER + ROWS).encode("latin-1"),
        [":1:19  not UTF-8 here; save the file as UTF-8"],
    ),
    "binary": (b"a\0b", ["a binary file; a table is plain text"]),
}


@pytest.mark.parametrize("name", REFUSED)
def test_sheets_that_are_refused(tmp_path: Path, name: str) -> None:
    content, messages = REFUSED[name]
    began = time.perf_counter()
    result = fit(tmp_path, content)
    assert time.perf_counter() - began < 5.0
    assert result.exit_code == 2
    assert result.stdout == ""
    for message in messages:
        assert message in result.stderr
    assert all(line.startswith(str(tmp_path)) for line in result.stderr.splitlines())
    assert "Traceback" not in result.stderr


@pytest.mark.parametrize("place", [".", "none.csv"])
def test_what_is_no_file_is_said(tmp_path: Path, place: str) -> None:
    result = CliRunner().invoke(app, ["fit", str(tmp_path / place)])
    assert result.exit_code == 2
    assert "a directory" in result.stderr or "no such file" in result.stderr


def test_a_tube_sheet_is_read_from_its_side_block(tmp_path: Path) -> None:
    """Water in a tube of 10 mm: 8V/D = 32 Q/(pi D³), tau = dp D/(4 L)."""
    flows = (1.0, 2.0, 3.0, 4.0, 5.0)
    rates = [32e-6 * flow / (np.pi * 0.01**3) for flow in flows]
    rows = "".join(f"{flow},{0.05 * rate * 4 * 2.0 / 0.01:.6f}\n" for flow, rate in zip(flows, rates, strict=True))
    found = document(tmp_path, "# diameter: 10 mm\n# length: 2 m\nflow [mL/s],pressure_drop [Pa]\n" + rows)
    assert found["selected"] == "newtonian"
    assert found["models"][0]["parameters"]["viscosity_Pa_s"] == pytest.approx(0.05, rel=1e-6)
    assert [point["shear_rate_1_s"] for point in found["points"]] == pytest.approx(rates, rel=1e-9)


def test_a_torque_sheet_is_read_from_its_side_block(tmp_path: Path) -> None:
    """A liquid of 0.8 Pa.s: T = 4 pi mu h Omega R_b² R_c²/(R_c² - R_b²) (Margules)."""
    bob, cup, height = 0.02, 0.022, 0.06
    speeds = (10.0, 20.0, 50.0, 100.0, 200.0)
    factor = 4 * np.pi * 0.8 * height * bob**2 * cup**2 / (cup**2 - bob**2) * 2 * np.pi / 60
    side = "# bob_radius: 20 mm\n# cup_radius: 22 mm\n# height: 60 mm\n"
    rows = "".join(f"{speed},{factor * speed * 1e3:.8f}\n" for speed in speeds)
    found = document(tmp_path, side + "speed [rpm],torque [mN.m]\n" + rows)
    assert found["selected"] == "newtonian"
    assert found["models"][0]["parameters"]["viscosity_Pa_s"] == pytest.approx(0.8, rel=1e-6)


def caution(tmp_path: Path, content: str, words: str) -> bool:
    return any(words in text for text in document(tmp_path, content)["cautions"])


def test_ramps_that_differ_are_a_caution(tmp_path: Path) -> None:
    down = "".join(f"{rate},{0.9 * stress:.3f}\n" for rate, stress in (
        map(float, row.split(",")) for row in reversed(ROWS.split())))  # fmt: skip
    assert caution(tmp_path, HEADER + ROWS + down, "the ramp down runs")
    again = "".join(f"{row}\n" for row in reversed(ROWS.split()))
    assert not caution(tmp_path, HEADER + ROWS + again, "the ramp down runs")


def test_turbulent_runs_and_vortices_are_flagged(tmp_path: Path) -> None:
    tube = "# diameter: 20 mm\n# length: 2 m\n# density: 1000 kg/m3\nflow [L/s],pressure_drop [Pa]\n"
    rows = "".join(f"{flow},{400 * flow:.2f}\n" for flow in (0.02, 0.05, 0.1, 0.5, 1.0))
    assert caution(tmp_path, tube + rows, "likely turbulent, Re_MR up to")
    cup = "# bob_radius: 20 mm\n# cup_radius: 22 mm\n# height: 60 mm\n# density: 1000 kg/m3\n"
    assert caution(
        tmp_path,
        cup + "speed [rpm],bob_stress [Pa]\n10,0.01\n50,0.05\n100,0.1\n500,0.5\n1000,1.0\n",
        "likely Taylor vortices",
    )


def test_settling_solids_are_flagged(tmp_path: Path) -> None:
    side = "# bob_radius: 20 mm\n# cup_radius: 22 mm\n# height: 60 mm\n# density: 1200 kg/m3\n"
    solids = "# particle_density: 2650 kg/m3\n# particle_size: 0.3 mm\n"
    rows = "speed [rpm],bob_stress [Pa]\n10,0.2\n50,1.0\n100,2.0\n200,4.0\n"
    assert caution(tmp_path, side + solids + rows, "the solids may settle")


def test_help_imports_no_optimiser() -> None:
    program = (
        "import sys\nfrom pipeflow.cli import app\n"
        "try: app(['fit', '--help'])\nexcept SystemExit: pass\n"
        "sys.exit(any(name.split('.')[0] in ('scipy', 'numpy') for name in sys.modules))"
    )
    assert subprocess.run([sys.executable, "-c", program], capture_output=True, check=False).returncode == 0
