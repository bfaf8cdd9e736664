"""The solve command as its user meets it: pages, JSON, exit status, what is loaded."""

import json
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
CASES = sorted((ROOT / "cases").glob("*.yaml"))
ELEMENT_KEYS = {
    "name", "kind", "diameter_m", "velocity_m_s", "regime", "method", "reynolds_mr", "reynolds_critical",
    "friction_factor_fanning", "wall_shear_stress_Pa", "wall_shear_rate_1_s", "friction_loss_Pa",
    "friction_loss_upper_Pa", "fitting_loss_Pa", "rise_m",
}  # fmt: skip
TOTAL_KEYS = {
    "friction_loss_Pa", "fitting_loss_Pa", "equipment_loss_Pa", "head_loss_m", "head_loss_upper_m", "static_head_m",
    "total_head_m", "pressure_required_Pa",
}  # fmt: skip
MINIMAL = """\
title: One pipe
fluid: {{density: 1000 kg/m3, rheology: {{model: newtonian, viscosity: 100 mPa.s}}}}
flow: {flow}
route:
  - {{pipe: only, diameter: 100 mm, roughness: 0 mm, length: 50 m}}
limits: {{head_loss: {limit}}}
"""


def pipeflow(*arguments, cwd=ROOT):
    code = "from pipeflow.cli import main; main()"
    return subprocess.run(
        [sys.executable, "-W", "error", "-c", code, *map(str, arguments)],
        cwd=cwd,
        capture_output=True,
        text=True,
        check=False,
    )


def written(folder, flow="20 m3/h", limit="10 m"):
    path = folder / "one.yaml"
    path.write_text(MINIMAL.format(flow=flow, limit=limit), encoding="utf-8")
    return path


@pytest.mark.parametrize("case", CASES, ids=lambda path: path.stem)
def test_every_demo_case_holds_its_limits_on_a_page_of_80_columns(case):
    run = pipeflow("solve", case)
    assert run.returncode == 0, run.stdout + run.stderr
    assert run.stderr == ""
    assert max(len(line) for line in run.stdout.splitlines()) <= 80
    words = " ".join(run.stdout.split())
    assert "local codes and the judgement of a licensed engineer take precedence" in words
    assert words.count("A pressurised slurry line can hurt people") == 1
    assert "\x1b" not in run.stdout


def test_json_has_the_fixed_keys_and_si_figures(tmp_path):
    run = pipeflow("solve", "--json", written(tmp_path))
    document = json.loads(run.stdout)
    assert run.stdout.count("\n") == 1
    assert {"title", "revision", "file", "flow_m3_s", "elements", "totals", "checks", "cautions"} <= document.keys()
    (element,) = document["elements"]
    assert element.keys() >= ELEMENT_KEYS
    assert document["totals"].keys() >= TOTAL_KEYS
    # Hagen–Poiseuille, 128 mu L Q/(pi D^4) = 11.318 kPa; Re = 4 rho Q/(pi D mu) = 707.4
    assert element["regime"] == "laminar"
    assert element["friction_loss_Pa"] == pytest.approx(
        128 * 0.1 * 50 * (20 / 3600) / (3.141592653589793 * 0.1**4), rel=1e-12
    )
    assert element["reynolds_mr"] == pytest.approx(4 * 1000 * (20 / 3600) / (3.141592653589793 * 0.1 * 0.1), rel=1e-12)
    assert document["totals"]["head_loss_m"] == pytest.approx(element["friction_loss_Pa"] / 9806.65, rel=1e-12)


def test_a_failing_limit_leaves_with_1_and_a_bad_case_does_not_stop_the_others(tmp_path):
    good = written(tmp_path)
    bad = tmp_path / "bad.yaml"
    bad.write_text("title: 1\n", encoding="utf-8")
    assert pipeflow("solve", good).returncode == 0
    assert pipeflow("solve", written(tmp_path, limit="1 m")).returncode == 1
    run = pipeflow("solve", "--json", bad, good)
    assert run.returncode == 2
    assert [json.loads(line)["title"] for line in run.stdout.splitlines()] == ["One pipe"]
    assert run.stderr.startswith(f"{bad}:1:1")
    assert "Traceback" not in run.stderr


def test_a_line_at_rest_has_the_limit_of_a_starting_flow(tmp_path):
    document = json.loads(pipeflow("solve", "--json", written(tmp_path, flow="0 m3/h")).stdout)
    (element,) = document["elements"]
    assert element["regime"] == "no flow"
    assert element["friction_loss_Pa"] == 0
    assert element["friction_factor_fanning"] is None
    assert any(caution.startswith("at rest") for caution in document["cautions"])


def test_default_roughness_and_nearness_to_the_transition_are_cautions(tmp_path):
    path = written(tmp_path, flow="110 m3/h", limit="1000 m")
    text = path.read_text(encoding="utf-8").replace(", roughness: 0 mm", "")
    path.write_text(text, encoding="utf-8")
    cautions = json.loads(pipeflow("solve", "--json", path).stdout)["cautions"]
    assert any("roughness 0.05 mm" in caution and "only" in caution for caution in cautions)
    assert any("transitional at design flow" in caution for caution in cautions)


@pytest.mark.parametrize(
    "arguments", [("--help",), ("solve", "cases/kaolin-slip.yaml"), ("solve", "--json", "cases/kaolin-slip.yaml")]
)
def test_neither_scipy_nor_matplotlib_is_loaded(arguments):
    code = (
        "import sys, contextlib\nfrom pipeflow.cli import main\n"
        "with contextlib.suppress(SystemExit):\n    main()\n"
        "loaded = {name.split('.')[0] for name in sys.modules}\n"
        "print(sorted(loaded & {'scipy', 'matplotlib', 'jinja2'}), file=sys.stderr)"
    )
    run = subprocess.run([sys.executable, "-c", code, *arguments], cwd=ROOT, capture_output=True, text=True, check=True)
    assert run.stderr.strip() == "[]"


def test_a_bug_is_owned_and_leaves_with_3(tmp_path):
    code = (
        "import pipeflow.study, sys\nfrom pipeflow.cli import main\n"
        "def broken(case):\n    raise KeyError('x')\n"
        "pipeflow.study.solve = broken\nmain()"
    )
    run = subprocess.run(
        [sys.executable, "-c", code, "solve", str(written(tmp_path))], capture_output=True, text=True, check=False
    )
    assert run.returncode == 3
    assert "a bug of ours" in run.stderr
    assert "Traceback" not in run.stderr


def test_us_units_give_the_same_line_as_si(tmp_path):
    si = tmp_path / "si.yaml"
    us = tmp_path / "us.yaml"
    si.write_text(US_AND_SI["si"], encoding="utf-8")
    us.write_text(US_AND_SI["us"], encoding="utf-8")
    first, second = (json.loads(pipeflow("solve", "--json", path).stdout) for path in (si, us))
    for key, value in first["totals"].items():
        assert second["totals"][key] == pytest.approx(value, rel=1e-12), key


US_AND_SI = {
    "si": """\
title: Same line
fluid:
  density: 1281.477071 kg/m3
  rheology: {model: bingham, yield_stress: 4.788025898 Pa, plastic_viscosity: 20 mPa.s}
flow: 0.01261803928 m3/s
source: {level: 3.048 m}
destination: {pressure: 68.94757293168361 kPa}
route:
  - {pipe: only, diameter: 101.6 mm, length: 91.44 m, rise: 1.524 m, roughness: 0.0508 mm, fittings: {elbow_90: 2}}
""",
    "us": f"""\
title: Same line
fluid:
  density: {1281.477071 / (0.45359237 / 0.3048**3)!r} lb/ft3
  rheology:
    model: bingham
    yield_stress: {4.788025898 / (0.45359237 * 9.80665 / 0.3048**2)!r} lbf/ft2
    plastic_viscosity: 20 cP
flow: 200 US gpm
source: {{level: 10 ft}}
destination: {{pressure: 10 psi}}
route:
  - {{pipe: only, diameter: 4 in, length: 300 ft, rise: 5 ft, roughness: 0.002 in, fittings: {{elbow_90: 2}}}}
""",
}


def test_the_profile_puts_the_pump_where_the_case_has_it():
    """Before a pump after the suction line stands the source's pressure less what the suction line loses."""
    document = json.loads(pipeflow("solve", "--json", ROOT / "cases" / "thickener-underflow.yaml").stdout)
    profile, (suction, *_) = document["profile"], document["elements"]
    assert profile["pump_after"] == "suction line"
    before, after = (profile["points"][profile["before_pump"] + step] for step in (0, 1))
    weight = document["density_kg_m3"] * 9.80665
    head = 3.2 - (suction["friction_loss_Pa"] + suction["fitting_loss_Pa"]) / weight
    assert before["head_m"] == pytest.approx(head, rel=1e-9)
    reducer = document["elements"][2]["reducer_loss_Pa"] if after["element"] != "densitometer" else 0.0
    assert after["head_m"] == pytest.approx(head + profile["pump_head_m"] - reducer / weight, rel=1e-9)
    assert profile["pump_head_m"] == pytest.approx(document["totals"]["total_head_m"], rel=1e-9)
