"""Files of own constants and of conditions: read row by row, refused with their place."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.constants_file import read_at, read_own_constants
from panelview.intake.problems import InputRefused, Severity


@pytest.fixture
def written(tmp_path):
    def write(content: str | bytes):
        path = tmp_path / "own.csv"
        path.write_bytes(content.encode() if isinstance(content, str) else content)
        return path

    return write


class TestOwnConstants:
    def test_an_energy_is_taken_as_it_is(self, written, catalogue):
        file = "step,delta_g0_prime_kj_per_mol,sd_kj_per_mol,source\nhexokinase,−19.2,0.5,a table\n"
        (own,) = read_own_constants(written(file), catalogue).values()
        assert (own.step_id, own.delta_g0_prime, own.ln_k_prime) == ("hexokinase", -19.2, None)
        assert (own.sd, own.source) == (0.5, "a table")

    def test_a_constant_is_taken_as_its_logarithm(self, written, catalogue):
        (own,) = read_own_constants(written("step,k_prime\nhexokinase,1.5e3\n"), catalogue).values()
        assert own.ln_k_prime == math.log(1500)
        assert own.delta_g0_prime is None

    def test_without_a_source_the_file_is_named_and_without_sd_that_of_our_own_constant_kept(self, written, catalogue):
        (own,) = read_own_constants(written("step,k_prime\nhexokinase,1500\n"), catalogue).values()
        k = [s.id for s in catalogue.steps].index("hexokinase")
        assert own.source == "own.csv"
        assert own.sd == catalogue.constants.anchors[k].sd > 0

    @pytest.mark.parametrize(
        "content",
        [
            "Step;K prime\nhexokinase;1500\n",
            "step\tk_prime\r\n\r\nhexokinase\t1500\r\n",
            "\ufeffstep,k_prime\nhexokinase,1500\n\n",
            'step,k_prime,source\n"hexokinase",1500,"A, B; C"\n',
        ],
        ids=["semicolons", "tabs and a blank line", "byte-order mark", "quotes"],
    )
    def test_the_file_may_be_written_as_a_panel_may(self, written, catalogue, content):
        assert read_own_constants(written(content), catalogue)["hexokinase"].ln_k_prime == math.log(1500)

    @pytest.mark.parametrize(
        ("content", "row", "column", "what"),
        [
            ("", 0, "", "empty"),
            ("step\nhexokinase\n", 1, "", "needs the column step and one of"),
            ("step,k_prime,delta_g0_prime_kj_per_mol\nhexokinase,1,1\n", 1, "", "one of"),
            ("enzyme,k_prime\nhexokinase,3\n", 1, "", "needs the column step"),
            ("step,k_prime,k_prime\nhexokinase,3,4\n", 1, "k_prime", "two columns"),
            ("step,k_prime\nnonsense,3\n", 2, "step", "“nonsense” is no catalogued step"),
            ("step,k_prime\n\nhexokinase,3\nhexokinase,4\n", 4, "step", "hexokinase is given twice"),
            ("step,k_prime\nhexokinase,0\n", 2, "k_prime", "above zero"),
            ("step,k_prime\nhexokinase,-3\n", 2, "k_prime", "above zero"),
            ("step,k_prime\nhexokinase,\n", 2, "k_prime", "is not a number"),
            ("step,k_prime\nhexokinase,inf\n", 2, "k_prime", "is not a number"),
            ("step,k_prime\nhexokinase,nan\n", 2, "k_prime", "is not a number"),
            ("step,k_prime\nhexokinase,1_500\n", 2, "k_prime", "is not a number"),
            ("step,k_prime\nhexokinase,1e999\n", 2, "k_prime", "is not a number"),
            ("step;k_prime\nhexokinase;1,5\n", 2, "k_prime", "is not a number"),
            ("step,k_prime,sd_kj_per_mol\nhexokinase,3,-1\n", 2, "sd_kj_per_mol", "cannot be negative"),
            ("step,k_prime\nhexokinase,3,4,5\n", 2, "", "this line has 4 cells, the heading has 2"),
            ('step,k_prime\nhexokinase,"3\n', 2, "", "cannot be cut into cells"),
        ],
    )
    def test_what_is_wrong_is_told_with_its_place(self, written, catalogue, content, row, column, what):
        with pytest.raises(InputRefused) as caught:
            read_own_constants(written(content), catalogue)
        (problem,) = caught.value.problems
        assert (problem.severity, problem.file) == (Severity.FILE, "own.csv")
        assert (problem.row, problem.column) == (row, column)
        assert what in problem.what
        assert problem.remedy

    def test_a_folder_or_a_missing_file_is_refused(self, tmp_path, catalogue):
        for path in (tmp_path, tmp_path / "gone.csv"):
            with pytest.raises(InputRefused):
                read_own_constants(path, catalogue)


class TestConditions:
    def test_rows_keep_their_order_and_only_the_conditions_they_state(self, written):
        rows = read_at(written("step,ph,temperature_c,pmg\nhexokinase,7.0,25,\nenolase,,,3.5\nhexokinase,8,,\n"))
        assert [(r.row, r.step) for r in rows] == [(2, "hexokinase"), (3, "enolase"), (4, "hexokinase")]
        assert rows[0].conditions == {"ph": 7.0, "temperature": 298.15}
        assert rows[1].conditions == {"pmg": 3.5}
        assert rows[2].conditions == {"ph": 8.0}

    def test_a_reaction_stands_in_for_a_step(self, written):
        (row,) = read_at(written("reaction,ionic_strength_mol_per_l\n2 adp = atp + amp,0.1\n"))
        assert (row.step, row.reaction, row.conditions) == ("", "2 adp = atp + amp", {"ionic_strength": 0.1})

    def test_a_column_of_steps_alone_takes_the_conditions_of_the_command(self, written):
        assert [r.conditions for r in read_at(written("step\nhexokinase\nenolase\n"))] == [{}, {}]

    @pytest.mark.parametrize(
        ("column", "text"),
        [
            ("ph", "4.9"),
            ("ph", "9.1"),
            ("temperature_c", "-1"),
            ("temperature_c", "51"),
            ("ionic_strength_mol_per_l", "0.36"),
            ("ionic_strength_mol_per_l", "-0.1"),
        ],
    )
    def test_conditions_out_of_range_are_refused_by_row_and_column(self, written, column, text):
        with pytest.raises(InputRefused) as caught:
            read_at(written(f"step,{column}\nhexokinase,\nhexokinase,{text}\n"))
        (problem,) = caught.value.problems
        assert (problem.row, problem.column) == (3, column)
        assert "outside the model's range" in problem.what

    def test_a_row_that_names_nothing_is_refused(self, written):
        with pytest.raises(InputRefused) as caught:
            read_at(written("step,reaction,ph\n,,7\n"))
        assert caught.value.problems[0].row == 2


@given(data=st.one_of(st.binary(max_size=80), st.text('step,k_prime\n;h"1e-.', max_size=80).map(str.encode)))
def test_any_bytes_are_constants_or_a_refusal(tmp_path_factory, catalogue, data):
    path = tmp_path_factory.getbasetemp() / "any.csv"
    path.write_bytes(data)
    for read in (read_at, lambda p: read_own_constants(p, catalogue)):
        try:
            told = (read(path), ())[1]
        except InputRefused as error:
            told = error.problems
        assert all(p.what and p.remedy for p in told)
