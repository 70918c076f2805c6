"""What all tests share: no tables of whoever runs them, and one line to start from."""

import os

import pytest

from pipeflex.codes import code
from pipeflex.data.pipes import elbow, pipe
from pipeflex.model.design import Design
from pipeflex.model.duty import Case, Duty
from pipeflex.model.layout import Layout


def pytest_configure():
    os.environ.pop("PIPEFLEX_HOME", None)  # tables are listed while tests are collected


def pytest_collection_modifyitems(items):
    """Browser tests last: what drives the browser leaves an event loop running in the process."""
    items.sort(key=lambda item: "browser" in item.path.parts)


@pytest.fixture(autouse=True)
def empty_home(tmp_path_factory, monkeypatch):
    """A user's folder with nothing in it."""
    monkeypatch.setenv("PIPEFLEX_HOME", str(tmp_path_factory.mktemp("home")))


@pytest.fixture(scope="session")
def line():
    """An invented steam line with a loop of 6 m; sizes of another shape, or any other field, by name."""

    def make(
        shape="U",
        *,
        material="A106-B",
        size="DN 200",
        schedule="40",
        hot="240 degC",
        cold="-10 degC",
        expansion="current",
        code_key="B31.3-2018",
        pipe_fields=None,
        duty=None,
        limits=None,
        sizes=None,
        **layout,
    ):
        given = {
            "U": {"run": "40 m", "leg": "6 m", "width": "3 m"},
            "L": {"run": "9 m", "leg": "6 m"},
            "Z": {"run": "12 m", "leg": "7 m", "before": "5 m"},
        }
        cases = (Case(name="operating", temperature=hot), Case(name="minimum ambient", temperature=cold))
        return Design(
            pipe=pipe(material, size, schedule, expansion=expansion, **(pipe_fields or {})),
            layout=Layout(
                shape=shape,
                sizes=given[shape] if sizes is None else sizes,
                **{"corners": elbow("DN 200"), **layout},
            ),
            duty=Duty(**{"cases": cases, **(duty or {})}),
            code=code(code_key),
            **({"limits": limits} if limits else {}),
        )

    return make
