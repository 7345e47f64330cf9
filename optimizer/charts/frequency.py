"""Which switching frequency, and why there: least loss and least volume over it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import altair as alt

from optimizer.charts.content import BAND_STEPS, ENVELOPED, Content
from optimizer.charts.design_data import Records
from optimizer.charts.envelope_data import FEWEST, FILTER_COLUMN, SHOWN_FREQUENCY, Envelope
from optimizer.charts.look import FAINT, INK, class_scales, heading
from optimizer.charts.quantities import Quantity, quantity_of
from optimizer.charts.selections import Selections
from optimizer.study.study import Study

FREQUENCY_TITLE = "switching frequency [kHz]"
ROOM = 0.04
"""Share of the range left free at its ends [-]."""
HEADROOM = 0.35
"""Share of the envelopes' range shown above it, for designs on the fronts [-]."""
STEPS = (1.0, 2.0, 5.0)


@dataclass(frozen=True)
class EnvelopeView:
    """What one envelope is drawn with.

    Attributes:
        found: the envelope.
        quantity: what is least.
        concepts: in the study's order.
        records: all shown designs: the axes hold for each of them.
        with_frequency: whether the axis of the frequency is labelled.
        with_steps: whether the steps of the emission band's start are marked.
    """

    found: Envelope
    quantity: Quantity
    concepts: Sequence[str]
    records: Records
    with_frequency: bool
    with_steps: bool = False

    @property
    def has_filter(self) -> bool:
        """Whether the filters' volumes are known."""
        return any(FILTER_COLUMN in record for record in self.found.records)

    @property
    def name(self) -> str:
        """Name of the data set, with which the names of all layers begin."""
        return self.found.name

    @property
    def x(self) -> alt.X:
        """Frequency, logarithmic, over all envelopes and designs."""
        values = [record[SHOWN_FREQUENCY] for record in (*self.found.records, *self.records)]
        low, high = min(values), max(values)
        reach = (high / low) ** ROOM if high > low else 1.5
        ticks = [step * 10.0**power for power in range(-2, 6) for step in STEPS]
        axis = alt.Axis(
            values=[value for value in ticks if low <= value <= high],
            format="~g",
            labels=self.with_frequency,
        )
        scale = alt.Scale(type="log", domain=[low / reach, high * reach], nice=False)
        title = FREQUENCY_TITLE if self.with_frequency else None
        return alt.X(f"{SHOWN_FREQUENCY}:Q", scale=scale, title=title, axis=axis)

    @property
    def y(self) -> alt.Y:
        """The quantity over the envelopes and somewhat above; what lies farther up is cut off."""
        values = [record[self.found.column] for record in self.found.records]
        values += [record[FILTER_COLUMN] for record in self.found.records if FILTER_COLUMN in record]
        low, high = min(values), max(values)
        span = max(high - low, 0.05 * abs(high))
        scale = alt.Scale(domain=[low - ROOM * span, high + HEADROOM * span], nice=False, zero=False)
        axis = alt.Axis(tickCount=5, minExtent=30)
        return alt.Y(f"{self.found.column}:Q", scale=scale, title=self.quantity.label, axis=axis)

    @property
    def colour(self) -> alt.Color:
        """By concept; the legend stands at the fronts."""
        return alt.Color("concept:N", scale=class_scales(self.concepts)[0], legend=None)

    def lines(self) -> alt.Chart:
        """A line a class through the best candidates of the frequency bins."""
        tooltip = [
            alt.Tooltip("concept:N", title="concept"),
            alt.Tooltip(f"{SHOWN_FREQUENCY}:Q", title=FREQUENCY_TITLE, format=".3~r"),
            alt.Tooltip(f"{self.found.column}:Q", title=self.quantity.label, format=".3~r"),
        ]
        dots = alt.OverlayMarkDef(size=14, filled=True)
        return (
            alt.Chart(alt.NamedData(self.name), name=f"{self.name}_lines")
            .mark_line(strokeWidth=1.6, point=dots)
            .encode(x=self.x, y=self.y, color=self.colour, tooltip=tooltip)
        )

    def filters(self) -> alt.Chart:
        """Of the same candidates the volume of their filters, dashed."""
        share = alt.Y(f"{FILTER_COLUMN}:Q")
        tooltip = [
            alt.Tooltip("concept:N", title="concept"),
            alt.Tooltip(f"{SHOWN_FREQUENCY}:Q", title=FREQUENCY_TITLE, format=".3~r"),
            alt.Tooltip(f"{FILTER_COLUMN}:Q", title="filters [l]", format=".3~r"),
        ]
        return (
            alt.Chart(alt.NamedData(self.name), name=f"{self.name}_filters")
            .mark_line(strokeWidth=1.1, strokeDash=[4, 3])
            .encode(x=self.x, y=share, color=self.colour, tooltip=tooltip)
        )

    def marks(self) -> alt.Chart:
        """A line at every step of the emission band's start."""
        return (
            alt.Chart(alt.NamedData(BAND_STEPS), name=f"{self.name}_steps")
            .mark_rule(color=FAINT, strokeWidth=0.8)
            .encode(x=self.x)
        )

    def title(self) -> alt.TitleParams:
        """Heading that says what the envelope was drawn from."""
        words = f"Least {self.quantity.title} at each switching frequency"
        if self.with_frequency:
            told = ["dashed: of it the filters"] if self.has_filter else []
            told += ["grey lines: 150 kHz/n"] if self.with_steps else []
            return heading(words, *(["; ".join(told)] if told else []))
        source = "front designs" if self.found.front_only else "feasible candidates"
        few = f"bands with fewer than {FEWEST} left out"
        return heading(words, f"best of {self.found.candidates:,} {source} by frequency band; {few}")


def envelope_views(study: Study, found: Content) -> list[EnvelopeView]:
    """The envelopes from top to bottom; the frequency is labelled under the lowest.

    Args:
        study: the study.
        found: what is drawn.
    """
    classes, records, last = study.concept_names, found.designs.records, ENVELOPED[-1]
    return [
        EnvelopeView(item, quantity_of(name), classes, records, name == last, bool(found.steps))
        for name, item in zip(ENVELOPED, found.envelopes, strict=True)
    ]


def envelope_view(view: EnvelopeView, linked: Selections, width: int, height: int) -> alt.LayerChart:
    """An envelope, with the grouped designs as dots, the picked one as a ring and a line at its frequency.

    Args:
        view: what is drawn.
        linked: the dashboard's selections.
        width, height: of the plot [px].
    """
    designs = alt.Chart()
    group = (
        designs.mark_point(filled=True, size=9, opacity=0.4, clip=True)
        .encode(x=view.x, y=view.y, color=view.colour)
        .transform_filter(linked.classes)
        .transform_filter(linked.group, empty=False)
        .properties(name=f"{view.name}_group")
    )
    picked = (
        designs.mark_point(
            shape="circle", size=150, stroke=INK, strokeWidth=1.6, fill=None, opacity=1.0, clip=True
        )
        .encode(x=view.x, y=view.y)
        .transform_filter(linked.picked_test)
        .properties(name=f"{view.name}_picked")
    )
    at = (
        designs.mark_rule(color=INK, strokeWidth=0.8, strokeDash=[2, 3])
        .encode(x=view.x)
        .transform_filter(linked.picked_test)
        .properties(name=f"{view.name}_at")
    )
    layers = [view.marks()] if view.with_steps else []
    layers += [at, group]
    if view.has_filter:
        layers.append(view.filters().transform_filter(linked.classes))
    layers += [view.lines().transform_filter(linked.classes), picked]
    return alt.LayerChart(layer=layers, width=width, height=height, title=view.title())
