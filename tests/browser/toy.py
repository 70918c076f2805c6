"""A small desk of invented content that holds every part once, as cells for a test's notebook."""

# ruff: noqa: E501
TOY = """\
import ipywidgets as widgets
from pipeflex.desks.entry import (
    Band, Button, ChoiceField, EntryField, Fold, Heading, Headline, Note, Panel, Row)
from pipeflex.desks.keys import DeskBox
from pipeflex.desks.static import StaticCopy
from pipeflex.desks.view import PictureView

if "desk" in globals():
    desk.close_all()
leg = [5.10]
count = [0]

def told(what):
    count[0] += 1
    log.text = f"{count[0]}: {what}"

def accept(name):
    def commit(text):
        told(f"{name} {text}")
        return True, "", ""
    return commit

def scene():
    shape = {"type": "rect", "x0": 0, "x1": 2, "y0": 6, "y1": 6.4, "fillcolor": "heat/0.25",
             "line": {"color": "heat", "width": 1}}
    words = {"x": 1, "y": leg[0], "text": f"{leg[0]:.2f} m", "showarrow": False, "yshift": 12}
    run = {"type": "scatter", "name": "run", "x": [0, 0, 2, 2], "y": [0, leg[0], leg[0], 0],
           "mode": "lines+markers", "line": {"color": "ink", "width": 3}, "customdata": ["A", "B", "C", "D"],
           "marker": {"color": ["ink", "ribbon", "ribbon", "ink"], "size": 9}}
    return {"data": [run], "layout": {"shapes": [shape], "annotations": [words],
            "margin": {"l": 0, "r": 0, "t": 0, "b": 0},
            "xaxis": {"visible": False, "range": [-1, 3]}, "yaxis": {"visible": False, "range": [-1, 7]}}}

def svg():
    return ('<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 60 100" width="60" height="100">'
            f'<title>{leg[0]}</title><path d="M5 99V{90 - 10 * leg[0]:g}H50V99" fill="none" stroke="#2B3440"/></svg>')

def commit_leg(text):
    try:
        value = float(text.removesuffix("m"))
    except ValueError:
        picture.stale = True
        headline.set(verdict="Cannot say", detail="The leg is not read.", mark="?")
        return False, "", f"leg: {text!r} is not a length; for example 5.1 m"
    if value > 666:
        raise RuntimeError("a fault on purpose")
    leg[0] = value
    picture.set_trait("scene", scene())
    picture.stale = False
    picture.description = f"A loop with a leg of {value:.2f} m."
    holds = value >= 5
    headline.set(verdict="Flexible enough" if holds else "Too stiff", detail=f"{5 / value:.0%} of the range.",
                 mark="\\u2713" if holds else "\\u2715")
    copy.show(svg(), picture.description)
    told(f"leg {value:g}")
    return True, f"= {value * 1000:g} mm" if "m" in text else "", ""

def undo():
    length.put("5.10")
    told("undone")

headline = Headline(verdict="Flexible enough", detail="98 % of the range, at corner C.", aside="demo code",
                    mark="\\u2713", lines=["By the beam. The rule would ask a leg of 7.9 m.", "Turns at a leg of 5.00 m."])
log = Note("-")
metric = Button("metric", lambda: told("metric"), pressed=True)
length = EntryField("Leg", "5.10", commit_leg, on_step=lambda n: f"{leg[0] + 0.05 * n:.2f}", unit="m",
                    demo=True, help="height of the loop")
top = Panel(headline, Row(log, metric, Button("U.S.", lambda: told("us"), pressed=False),
                          Button("undo", undo, help="takes the last change back"),
                          Button("redo", lambda: told("redone"), disabled=True)))
fields = Panel(
    Heading("Line"),
    EntryField("Line", "<b>ST</b>-1204", accept("line")),
    Row(ChoiceField("Size", "200", accept("size"), options=[("150", "DN 150"), ("200", "DN 200")]),
        ChoiceField("Schedule", "40", accept("schedule"), options=[("40", "Sch 40"), ("80", "Sch 80")], bare=True)),
    ChoiceField("Material", "b", accept("material"), options=[("b", "A106-B"), ("c", "<i>A106-C</i>")]),
    Heading("Heat"),
    EntryField("Hottest", "240", accept("hottest"), unit="degC", demo=True),
    EntryField("Coldest", "-10", accept("coldest"), unit="degC"),
    EntryField("Installed", "5 .. 35", accept("installed"), unit="degC"),
    Heading("Layout"),
    EntryField("Between anchors", "60", accept("run"), unit="m"),
    Row(length, Button("Fit", lambda: length.take("5.55"))),
    EntryField("Width", "2.00", accept("width"), on_step=lambda n: "2.05", unit="m"),
    EntryField("First guide", "1.50", accept("guide"), unit="m"),
    EntryField("Room", "6.00", accept("room"), unit="m"),
    Fold("Wall", EntryField("Insulation", "100", accept("insulation"), unit="mm"), summary="water test, 100 mm, c 1.5"),
    Fold("Supports", EntryField("Rest", "7", accept("rest"), unit="m"), summary="rest 7 m, mu 0.30"),
    layout=widgets.Layout(width="300px", flex="none"))
picture = PictureView(scene=scene(), description="A loop with a leg of 5.10 m.", height=330)
picture.layout.flex = "1 1 0"
slider = widgets.FloatSlider(value=0.3, min=0, max=1, step=0.1, description="Friction")
slider.observe(lambda change: told(f"friction {change['new']:.1f}"), "value")
ladder = widgets.HTML("<table><tr><td>rule</td><td>7.9 m</td></tr></table>")
bar = Panel(
    Row(Button("Write the sheet", lambda: told("written")),
        Note("saved in", link="files/line.toml", link_text="line.toml")),
    Row(Band("Ladder", ladder, summary="rule to beam", fill=lambda: told("filled")),
        Band("Friction", slider, summary="mu 0.30")))
body = widgets.HBox([fields, picture], layout=widgets.Layout(width="100%", grid_gap="12px"))
desk = DeskBox([top, body, bar, ladder, slider], "Toy desk")
copy = StaticCopy()
display(desk)
copy.show(svg(), picture.description)
"""

TOY_CELLS = ("1 + 1", TOY, "'end'")

CLICKS_CELL = """\
picture.observe(lambda change: told("clicked {x:.1f} {y:.1f} {trace} {customdata}".format(**change["new"])), "clicked")
"""
