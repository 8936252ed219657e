"""Journeys on the command line: what is printed, written, refused, and with which exit status."""

from __future__ import annotations

import csv
import json
import os
import subprocess
import sys
from pathlib import Path

import pytest

from panelview import command
from panelview.arguments import CAUTION
from panelview.command import DONE, FAILED, PARTLY_REFUSED, REFUSED, WRONG_USAGE
from panelview.output.batch import DOCUMENT
from panelview.resource_files import sample_data

LONG = "specimen,matrix,analyte,value,unit\n"
GOOD = LONG + "A,plasma,lactate,1.2,mmol/L\nA,plasma,pyruvate,0.1,mmol/L\nB,plasma,lactate,3.0,mmol/L\n"


class Shell:
    """Runs commands in a folder of their own and keeps what was said."""

    def __init__(self, folder: Path, capsys: pytest.CaptureFixture[str]) -> None:
        self.folder = folder
        self._capsys = capsys

    def file(self, name: str, content: str | bytes) -> Path:
        path = self.folder / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return path

    def run(self, *words: str | Path) -> int:
        self._capsys.readouterr()
        self.status = command.main([str(w) for w in words])
        said = self._capsys.readouterr()
        self.out, self.err = said.out, said.err
        assert "Traceback" not in self.out + self.err
        return self.status

    def review(self, panel: Path, *words: str | Path, out: str = "out") -> int:
        return self.run("review", panel, "--out", self.folder / out, "--no-pdf", *words)

    def rows(self, table: str, out: str = "out") -> list[dict[str, str]]:
        with (self.folder / out / table).open(encoding="utf-8-sig", newline="") as stream:
            return list(csv.DictReader(stream))

    def names(self) -> set[str]:
        return {path.name for path in self.folder.iterdir()}


@pytest.fixture
def shell(tmp_path, capsys) -> Shell:
    return Shell(tmp_path, capsys)


class TestReview:
    def test_a_sample_is_reviewed_into_tables_and_a_document(self, shell):
        assert shell.review(sample_data() / "red_cells.csv") == DONE
        assert "28 specimens reviewed" in shell.out
        assert CAUTION in shell.out
        written = {path.name for path in (shell.folder / "out").iterdir()}
        assert written == {"steps.csv", "drivers.csv", "state.csv", "intake.csv", DOCUMENT}
        found = {(r["specimen"], r["step"]) for r in shell.rows("steps.csv") if r["highlighted"] == "true"}
        assert ("RC-P1", "pyruvate_kinase") in found
        assert shell.names() == {"out"}

    def test_steps_csv_has_the_columns_of_the_contract(self, shell):
        shell.review(shell.file("panel.csv", GOOD))
        with (shell.folder / "out" / "steps.csv").open(encoding="utf-8-sig") as stream:
            columns = stream.readline().rstrip("\n").split(",")
        promised = (
            "specimen step enzyme ec pathway reaction assessability reason ln_gamma ln_k_prime "
            "delta_g0_prime_kj_per_mol delta_g0_prime_sd delta_g_kj_per_mol delta_g_sd delta_g_lower95 delta_g_upper95 "
            "p_reversed p_near_equilibrium direction distance reference_n reference_lower reference_upper "
            "shift_kj_per_mol shift_sd shift q_value highlighted censored inferred constant_source"
        )
        assert not set(promised.split()) - set(columns)

    def test_every_specimen_has_every_step(self, shell):
        shell.review(shell.file("panel.csv", GOOD))
        rows = shell.rows("steps.csv")
        of_a = [r["step"] for r in rows if r["specimen"] == "A"]
        assert len(rows) == 2 * len(of_a)
        assert {r["assessability"] for r in rows} <= {"assessed", "proxy", "not_assessable", "missing"}
        assert all(r["reason"] for r in rows if r["assessability"] in ("not_assessable", "missing", "proxy"))

    def test_a_page_a_specimen_and_one_for_all_of_three(self, shell):
        panel = shell.file("panel.csv", GOOD + "C,plasma,lactate,2.0,mmol/L\n")
        assert shell.run("review", panel, "--out", shell.folder / "out") == DONE
        pages = sorted(path.name for path in (shell.folder / "out").glob("*.pdf"))
        assert pages == ["A.pdf", "B.pdf", "C.pdf", "cohort.pdf"]
        assert all((shell.folder / "out" / p).read_bytes().startswith(b"%PDF") for p in pages)

    def test_one_specimen_is_one_specimen(self, shell):
        shell.review(shell.file("panel.csv", LONG + "A,plasma,lactate,1.2,mmol/L\n"))
        assert shell.out.startswith("1 specimen reviewed, 0 steps highlighted; written to ")

    def test_quiet_says_nothing(self, shell):
        assert shell.review(shell.file("panel.csv", GOOD), "--quiet") == DONE
        assert (shell.out, shell.err) == ("", "")

    def test_a_second_review_takes_the_place_of_the_first(self, shell):
        panel = shell.file("panel.csv", GOOD)
        shell.review(panel)
        shell.review(panel, "--ph", "7.3")
        assert {r["specimen"] for r in shell.rows("steps.csv")} == {"A", "B"}
        conditions = json.loads((shell.folder / "out" / DOCUMENT).read_text(encoding="utf-8"))
        assert "given on the command line" in json.dumps(conditions)

    def test_a_folder_with_other_files_is_not_written_into(self, shell):
        (shell.folder / "out").mkdir()
        kept = shell.folder / "out" / "notes.txt"
        kept.write_text("mine", encoding="utf-8")
        assert shell.review(shell.file("panel.csv", GOOD)) == REFUSED
        assert kept.read_text(encoding="utf-8") == "mine"
        assert [p.name for p in (shell.folder / "out").iterdir()] == ["notes.txt"]
        assert len(shell.err.splitlines()) == 1

    def test_the_same_input_gives_the_same_tables(self, shell):
        panel = sample_data() / "muscle_biopsies.csv"
        shell.review(panel, out="one")
        shell.review(panel, out="two")
        for name in ("steps.csv", "drivers.csv", "state.csv", "intake.csv"):
            assert (shell.folder / "one" / name).read_bytes() == (shell.folder / "two" / name).read_bytes()

    def test_two_files_are_one_study(self, shell):
        first = shell.file("one.csv", GOOD)
        second = shell.file("two.csv", GOOD.replace("A,", "C,").replace("B,", "D,"))
        assert shell.run("review", first, second, "--out", shell.folder / "out", "--no-pdf") == DONE
        assert {r["specimen"] for r in shell.rows("steps.csv")} == {"A", "B", "C", "D"}

    def test_conditions_of_the_command_go_before_the_files(self, shell):
        panel = shell.file("panel.csv", "specimen,matrix,ph,Lactate (mmol/L),Pyruvate (mmol/L)\nA,liver,7.0,1.2,0.1\n")
        shell.review(panel, out="file")
        shell.review(panel, "--ph", "7.3", out="command")
        free = [
            next(float(r["value"]) for r in shell.rows("state.csv", out) if r["quantity"] == "nad_nadh_free")
            for out in ("file", "command")
        ]
        # Lactate dehydrogenase sets free one H⁺, so the ratio falls tenfold a pH unit at the same pair.
        assert free[0] / free[1] == pytest.approx(10**0.3, rel=0.02)

    def test_controls_of_another_file(self, shell):
        study = (sample_data() / "red_cells.csv").read_text(encoding="utf-8").splitlines()
        participants = [study[0]] + [line for line in study[1:] if ",participant," in line]
        panel = shell.file("participants.csv", "\n".join(participants) + "\n")
        controls = sample_data() / "red_cells.csv"
        assert shell.review(panel, "--reference", controls, out="apart") == DONE
        assert shell.review(controls, out="together") == DONE
        shifts = [
            {
                (r["specimen"], r["step"]): r["shift_kj_per_mol"]
                for r in shell.rows("steps.csv", out)
                if r["specimen"].startswith("RC-P")
            }
            for out in ("apart", "together")
        ]
        assert shifts[0] == shifts[1]

    def test_published_reference_and_none(self, shell):
        panel = sample_data() / "red_cells.csv"
        shell.review(panel, "--reference", "none", out="none")
        assert {r["shift"] for r in shell.rows("steps.csv", "none")} <= {"no_reference", ""}
        shell.review(panel, "--reference", "published", out="published")
        assert "within" in {r["shift"] for r in shell.rows("steps.csv", "published")}

    def test_the_floor_of_a_highlight(self, shell):
        panel = sample_data() / "red_cells.csv"
        shell.review(panel, "--shift-floor", "100", out="high")
        assert not [r for r in shell.rows("steps.csv", "high") if r["highlighted"] == "true"]


#: Files of which nothing can be used: name → (content, what the line on stderr must say).
HOPELESS = {
    "empty": (b"", "the file is empty"),
    "blank": (b"\n\n  \n", "empty"),
    "no header": (b"A,1,2\nB,3,4\n", "no column names the specimens"),
    "header only": (LONG.encode(), "no"),
    "not text": (b"\xff\xfe\x00\x01\x02", "damaged UTF-16"),
    "nothing but noise": (bytes(range(256)) * 20, ""),
}


class TestRefusedInput:
    @pytest.mark.parametrize("kind", HOPELESS)
    def test_a_hopeless_file_is_refused_in_a_line_and_nothing_is_written(self, shell, kind):
        content, words = HOPELESS[kind]
        panel = shell.file("panel.csv", content)
        assert shell.review(panel) == REFUSED
        assert shell.names() == {"panel.csv"}
        assert shell.out == ""
        lines = shell.err.splitlines()
        assert lines[0].startswith("panel.csv:")
        assert words in shell.err
        for line in lines:
            place, _, said = line.partition(": ")
            assert len(place.split(":")) == 3, line  # FILE:ROW:COLUMN
            assert ";" in said, line  # what is wrong; what to do

    def test_a_folder_is_refused(self, shell):
        (shell.folder / "panel.csv").mkdir()
        assert shell.review(shell.folder / "panel.csv") == REFUSED
        assert "folder" in shell.err
        assert shell.names() == {"panel.csv"}

    def test_a_missing_file_is_refused(self, shell):
        assert shell.review(shell.folder / "gone.csv") == REFUSED
        assert shell.err == "gone.csv::: there is no such file; check the path\n"

    def test_a_file_of_two_gigabytes_is_refused_unread(self, shell):
        huge = shell.folder / "huge.csv"
        with huge.open("wb") as stream:
            stream.truncate(2 * 2**30)
        assert shell.review(huge) == REFUSED
        assert "more than the" in shell.err
        assert shell.names() == {"huge.csv"}

    def test_one_hopeless_file_among_good_ones_writes_nothing(self, shell):
        good, bad = shell.file("good.csv", GOOD), shell.file("bad.csv", b"")
        assert shell.run("review", good, bad, "--out", shell.folder / "out", "--no-pdf") == REFUSED
        assert shell.names() == {"good.csv", "bad.csv"}
        assert "bad.csv::" in shell.err

    def test_an_earlier_review_survives_a_refused_one(self, shell):
        shell.review(shell.file("panel.csv", GOOD))
        before = (shell.folder / "out" / "steps.csv").read_bytes()
        assert shell.review(shell.file("panel.csv", b"")) == REFUSED
        assert (shell.folder / "out" / "steps.csv").read_bytes() == before


#: One bad row in a file that is otherwise good: the row's text → (row and column, words of the line).
BAD_ROWS = {
    "negative": ("A,plasma,glucose,-5,mmol/L", "4:value", "negative"),
    "zero": ("A,plasma,glucose,0,mmol/L", "4:value", "zero is not a concentration"),
    "not a number": ("A,plasma,glucose,lots,mmol/L", "4:value", "“lots” is not a number"),
    "two decimal marks": ("A,plasma,glucose,1.2.3,mmol/L", "4:value", "1.2.3"),
    "unknown unit": ("A,plasma,glucose,5,furlong", "4:", "furlong"),
    "unknown analyte": ("A,plasma,unobtanium,5,mmol/L", "4:", "unobtanium"),
    "misspelt analyte": ("A,plasma,glukose,5,mmol/L", "4:", "perhaps glucose"),
    "reported twice": ("A,plasma,lactate,1.9,mmol/L", "4:value", "more than once (rows 2, 4)"),
    "not finite": ("A,plasma,glucose,inf,mmol/L", "4:value", "inf"),
}


class TestRefusedValues:
    @pytest.mark.parametrize("kind", BAD_ROWS)
    def test_a_bad_row_is_left_out_with_its_place_and_the_rest_is_reviewed(self, shell, kind):
        row, place, words = BAD_ROWS[kind]
        rest = "B,plasma,lactate,3.0,mmol/L\n"
        panel = shell.file("panel.csv", GOOD.removesuffix(rest) + row + "\n" + rest)
        assert shell.review(panel) == DONE
        (line,) = shell.err.splitlines()
        assert line.startswith(f"panel.csv:{place}")
        assert words in line
        assert "; " in line.split(": ", 1)[1]
        assert {r["specimen"] for r in shell.rows("steps.csv")} == {"A", "B"}

    @pytest.mark.parametrize("kind", BAD_ROWS)
    def test_a_refused_value_never_vanishes(self, shell, kind):
        """It stands in intake.csv with its row, as written, without a concentration."""
        row, _, _ = BAD_ROWS[kind]
        panel = shell.file("panel.csv", GOOD + row.replace("A,", "B,") + "\n" + row.replace("A,", "C,") + "\n")
        shell.review(panel)
        of_c = [r for r in shell.rows("intake.csv") if r["specimen"] == "C"]
        written = row.split(",")
        assert [r["value_as_written"] for r in of_c] == [written[3]]
        if kind != "reported twice":
            assert of_c[0]["mol_per_l"] == ""
            assert of_c[0]["note"]

    def test_mixed_decimal_marks_are_never_guessed(self, shell):
        rows = "A;plasma;lactate;1,2;mmol/L\nA;plasma;pyruvate;0.1;mmol/L\nB;plasma;lactate;3,4;mmol/L\n"
        shell.review(shell.file("panel.csv", LONG.replace(",", ";") + rows))
        assert "decimal" in shell.err
        used = {r["value_as_written"]: r["mol_per_l"] for r in shell.rows("intake.csv")}
        assert "" in used.values()
        assert "1.2" not in {f"{float(v):g}" for v in used.values() if v}  # 1,2 mmol/L is not 1.2 mol/L

    @pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "latin-1"])
    def test_usual_encodings_are_read_alike(self, shell, encoding):
        text = LONG + "A,plasma,lactate,1200,µmol/L\n"
        assert shell.review(shell.file("panel.csv", text.encode(encoding))) == DONE
        (row,) = shell.rows("intake.csv")
        assert float(row["mol_per_l"]) == pytest.approx(1.2e-3)

    def test_a_mass_unit_becomes_a_concentration(self, shell):
        """G01: pyruvate 0.7 mg/dL is 0.0795 mmol/L (0.1136 mmol/L per mg/dL, clinical chemistry tables)."""
        shell.review(shell.file("panel.csv", LONG + "A,plasma,pyruvate,0.7,mg/dL\n"))
        (row,) = shell.rows("intake.csv")
        assert float(row["mol_per_l"]) == pytest.approx(0.0795e-3, rel=5e-3)

    @pytest.mark.parametrize(
        ("column", "value"),
        [("ph", "4.2"), ("ph", "nine"), ("temperature_c", "300"), ("ionic_strength_mol_per_l", "0.5")],
    )
    def test_a_specimen_with_impossible_conditions_is_refused_and_the_rest_written(self, shell, column, value):
        head = LONG.strip() + f",{column}\n"
        panel = shell.file("panel.csv", head + f"A,plasma,lactate,1.2,mmol/L,{value}\nB,plasma,lactate,2,mmol/L,\n")
        assert shell.review(panel) == PARTLY_REFUSED
        assert shell.err.startswith(f"panel.csv:2:{column}: ")
        assert {r["specimen"] for r in shell.rows("steps.csv")} == {"B"}

    def test_an_unknown_matrix_refuses_its_specimen(self, shell):
        panel = shell.file("panel.csv", GOOD.replace("B,plasma", "B,marble"))
        assert shell.review(panel) == PARTLY_REFUSED
        assert "marble" in shell.err
        assert {r["specimen"] for r in shell.rows("steps.csv")} == {"A"}


class TestInspect:
    def test_it_says_what_was_read_and_writes_nothing(self, shell):
        assert shell.run("inspect", sample_data() / "plasma_series.csv") == DONE
        assert "long, semicolon-separated, UTF-8, decimal comma" in shell.out
        assert "3-Hydroxybutyrate → hydroxybutyrate_3" in shell.out
        assert "<0,02" in shell.out
        assert shell.names() == set()

    def test_it_shows_what_is_refused_and_why(self, shell):
        panel = shell.file("panel.csv", GOOD + "B,plasma,glucose,-5,mmol/L\nB,plasma,unobtanium,5,mmol/L\n")
        assert shell.run("inspect", panel) == DONE
        assert "negative" in shell.out
        assert "unobtanium" in shell.out

    def test_an_unknown_column_is_told(self, shell):
        panel = shell.file("panel.csv", "specimen,analyte,value,unit,shoe size\nA,lactate,1.2,mmol/L,42\n")
        assert shell.run("inspect", panel) == DONE
        assert "shoe size" in shell.out

    def test_as_json(self, shell):
        assert shell.run("inspect", sample_data() / "red_cells.csv", "--format", "json") == DONE
        assert json.loads(shell.out)

    def test_a_hopeless_file(self, shell):
        assert shell.run("inspect", shell.file("panel.csv", b"")) == REFUSED
        assert shell.out == ""


class TestConstants:
    def rows(self, shell, *words) -> list[dict[str, str]]:
        assert shell.run("constants", "--format", "csv", *words) == DONE
        return list(csv.DictReader(shell.out.splitlines()))

    def test_every_step_has_a_row(self, shell, catalogue):
        rows = self.rows(shell)
        assert [r["step"] for r in rows] == [s.id for s in catalogue.steps]
        assert list(rows[0]) == [
            "step", "k_prime", "log10_k_prime", "delta_g0_prime_kj_per_mol", "delta_g0_prime_sd", "basis",
        ]  # fmt: skip
        unknown = [r for r in rows if r["basis"] == "none"]
        assert unknown
        assert {r["k_prime"] for r in unknown} == {""}

    def test_a_reaction_and_its_step_are_the_same(self, shell):
        (reaction,) = self.rows(shell, "--reaction", "pyruvate + nadh = lactate + nad")
        step = next(r for r in self.rows(shell) if r["step"] == "lactate_dehydrogenase")
        assert reaction["k_prime"] == step["k_prime"]
        assert reaction["basis"] == "measured"

    def test_a_reaction_the_other_way_round_has_the_inverse_constant(self, shell):
        (forward,) = self.rows(shell, "--reaction", "pyruvate + nadh = lactate + nad")
        (backward,) = self.rows(shell, "--reaction", "lactate + nad = pyruvate + nadh")
        assert float(forward["k_prime"]) * float(backward["k_prime"]) == pytest.approx(1)

    def test_coefficients(self, shell):
        (row,) = self.rows(shell, "--reaction", "2 adp = atp + amp")
        assert row["basis"] == "measured"
        (twice,) = self.rows(shell, "--reaction", "4 adp = 2 atp + 2 amp")
        assert float(twice["log10_k_prime"]) == pytest.approx(2 * float(row["log10_k_prime"]))

    def test_water_is_put_in_and_a_new_reaction_is_estimated(self, shell):
        """Glucose + 2 phosphate + 2 ADP = 2 lactate + 2 ATP (+ 2 water): −122 to −135 kJ/mol at pH 7 in
        biochemistry textbooks (memory)."""
        (row,) = self.rows(shell, "--reaction", "glucose + 2 phosphate + 2 adp = 2 lactate + 2 atp")
        assert row["basis"] == "estimated"
        energy, sd = float(row["delta_g0_prime_kj_per_mol"]), float(row["delta_g0_prime_sd"])
        assert energy - 1.96 * sd < -122
        assert energy + 1.96 * sd > -135
        assert sd < 10

    @pytest.mark.parametrize(
        ("reaction", "words"),
        [
            ("lactate = glucose", "not balanced in C"),
            ("lactat + nad = pyruvate + nadh", "perhaps lactate"),
            ("lactate + nad", "exactly one"),
            ("atp = atp", "nothing is left"),
            ("atp + water = adp + phosphate + hydrogen_ion", "hydrogen_ion is held by pH"),
        ],
    )
    def test_an_unreadable_reaction_is_wrong_usage(self, shell, reaction, words):
        assert shell.run("constants", "--reaction", reaction) == WRONG_USAGE
        assert words in shell.err
        assert shell.out == ""

    def test_at_gives_one_row_an_input_row_in_order(self, shell):
        at = shell.file(
            "at.csv",
            "step,ph,temperature_c\nlactate_dehydrogenase,7.0,37\nlactate_dehydrogenase,8.0,37\nhexokinase,,25\n",
        )
        rows = self.rows(shell, "--at", at)
        assert [r["step"] for r in rows] == ["lactate_dehydrogenase", "lactate_dehydrogenase", "hexokinase"]
        # One H⁺ is taken up: a tenfold change a pH unit.
        assert float(rows[0]["k_prime"]) / float(rows[1]["k_prime"]) == pytest.approx(10, rel=0.05)

    def test_at_agrees_with_the_plain_table(self, shell, catalogue):
        ids = [s.id for s in catalogue.steps]
        at = shell.file("at.csv", "step,ph,pmg\n" + "".join(f"{i},7.3,3.4\n" for i in ids))
        assert self.rows(shell, "--at", at) == self.rows(shell, "--ph", "7.3", "--pmg", "3.4")

    def test_at_takes_reactions_too(self, shell):
        at = shell.file("at.csv", "reaction,ph\n2 adp = atp + amp,7.0\n")
        (row,) = self.rows(shell, "--at", at)
        assert row["step"] == "2 adp = atp + amp"

    @pytest.mark.parametrize(
        ("content", "words"),
        [
            ("step,ph\nnonsense,7\n", "at.csv:2:step: “nonsense” is no catalogued step"),
            ("step,ph\nhexokinase,4\n", "at.csv:2:ph: "),
            ("step,ph\nhexokinase,seven\n", "“seven” is not a number"),
            ("enzyme,ph\nhexokinase,7\n", "the column step (or reaction) is missing"),
            ("", "the file is empty"),
        ],
    )
    def test_a_bad_at_file_is_refused_with_its_place(self, shell, content, words):
        assert shell.run("constants", "--at", shell.file("at.csv", content)) == REFUSED
        assert words in shell.err
        assert shell.out == ""

    def test_own_constants_replace_ours_and_say_so(self, shell):
        own = shell.file("own.csv", "step,k_prime,source\npyruvate_kinase,13790,a table\n")
        row = next(r for r in self.rows(shell, "--constants", own) if r["step"] == "pyruvate_kinase")
        assert float(row["k_prime"]) == pytest.approx(13790)
        assert row["basis"] == "own"

    @pytest.mark.parametrize(
        ("content", "words"),
        [
            ("step,k_prime\npyruvate_kinase,-3\n", "own.csv:2:k_prime: a K′ must be above zero"),
            ("step,k_prime\nnonsense,3\n", "own.csv:2:step: “nonsense” is no catalogued step"),
            ("step,k_prime\nhexokinase,3\nhexokinase,4\n", "own.csv:3:step: hexokinase is given twice"),
            ("step\nhexokinase\n", "own.csv:1:"),
        ],
    )
    def test_a_bad_constants_file_is_refused_with_its_place(self, shell, content, words):
        own = shell.file("own.csv", content)
        assert shell.run("constants", "--constants", own) == REFUSED
        assert words in shell.err
        assert shell.review(sample_data() / "red_cells.csv", "--constants", own) == REFUSED
        assert shell.names() == {"own.csv"}

    def test_the_uncertainty_of_the_conditions_widens_the_constants(self, shell):
        sharp = {r["step"]: float(r["delta_g0_prime_sd"]) for r in self.rows(shell) if r["delta_g0_prime_sd"]}
        vague = {
            r["step"]: float(r["delta_g0_prime_sd"])
            for r in self.rows(shell, "--ph-sd", "0.2")
            if r["delta_g0_prime_sd"]
        }
        # RT ln 10 = 5.94 kJ/mol a pH unit and proton at 37 °C.
        assert vague["lactate_dehydrogenase"] ** 2 - sharp["lactate_dehydrogenase"] ** 2 == pytest.approx(
            (5.94 * 0.2) ** 2, rel=0.05
        )
        assert all(vague[step] >= sharp[step] for step in sharp)


WRONG = [
    ("constants", "--ph", "4"),
    ("constants", "--ph", "nan"),
    ("constants", "--ph-sd", "-1"),
    ("constants", "--temperature", "70"),
    ("constants", "--ionic-strength", "0.5"),
    ("constants", "--matrix", "marble"),
    ("constants", "--format", "xml"),
    ("constants", "--frobnicate"),
    ("review",),
    ("review", "panel.csv"),
    ("review", "panel.csv", "--out"),
    ("review", "panel.csv", "--out", "out", "--jobs", "0"),
    ("review", "panel.csv", "--out", "out", "--free-ratio", "nad=3"),
    ("review", "panel.csv", "--out", "out", "--free-ratio", "nad_cytosol=-3"),
    ("review", "panel.csv", "--out", "out", "--shift-floor", "-1"),
    ("review", "panel.csv", "--out", "out", "--reference", "group:nobody"),
    ("inspect",),
]


@pytest.mark.parametrize("words", WRONG, ids=" ".join)
def test_wrong_usage_is_status_2_in_one_line_and_writes_nothing(shell, monkeypatch, words):
    monkeypatch.chdir(shell.folder)
    shell.file("panel.csv", GOOD)
    assert shell.run(*words) == WRONG_USAGE
    assert shell.out == ""
    (line,) = shell.err.splitlines()
    assert line.startswith("panelview: ")
    assert shell.names() == {"panel.csv"}


def test_a_fault_of_ours_is_told_without_a_traceback(shell, monkeypatch):
    def broken(*_):
        raise ZeroDivisionError("something")

    monkeypatch.setattr(command, "load_catalogue", broken)
    assert shell.run("constants") == FAILED
    assert "internal fault" in shell.err
    assert "please report it" in shell.err


@pytest.mark.skipif(sys.platform in ("win32", "darwin"), reason="these always have a display")
def test_without_a_display_the_window_is_refused_in_a_sentence(shell, monkeypatch):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    assert shell.run(sample_data() / "red_cells.csv") == FAILED
    assert shell.err.startswith("panelview: there is no display")
    assert "panelview review FILE --out DIR" in shell.err


@pytest.mark.parametrize("words", [("--help",), ("review", "--help"), ("constants", "--help"), ("--version",)])
def test_help_and_version_leave_with_zero(capsys, words):
    with pytest.raises(SystemExit) as left:
        command.main(words)
    assert left.value.code == 0
    assert capsys.readouterr().out


def test_the_program_runs_as_a_program_of_its_own(tmp_path):
    """One real process, from another folder, in a locale without Greek."""
    environment = os.environ | {
        "PYTHONPATH": str(Path(command.__file__).resolve().parents[1]),
        "LC_ALL": "C",
        "PYTHONUTF8": "0",
    }
    words = [sys.executable, "-m", "panelview", "review", str(sample_data() / "red_cells.csv")]
    done = subprocess.run(
        [*words, "--out", "out", "--no-pdf"], cwd=tmp_path, env=environment, capture_output=True, check=False
    )
    assert done.returncode == DONE, done.stderr.decode()
    assert "28 specimens reviewed" in done.stdout.decode("utf-8")
    assert done.stderr == b""
    assert sorted(p.name for p in tmp_path.iterdir()) == ["out"]


@pytest.mark.parametrize(
    ("words", "status", "told"),
    [
        (["nosuchpanel.csv"], 3, "nosuchpanel.csv::: there is no such file"),
        (["constants", "--reaction", ""], 2, "exactly one"),
        (["review", "x.csv", "--out", "y", "--reference", "group:"], 2, "names no group"),
    ],
    ids=["a file that is not there", "an empty reaction", "a group without a name"],
)
def test_what_names_nothing_is_told(words, status, told, capsys, monkeypatch):
    for name in ("DISPLAY", "WAYLAND_DISPLAY", "QT_QPA_PLATFORM"):
        monkeypatch.delenv(name, raising=False)
    assert command.main(words) == status
    assert told in capsys.readouterr().err
