"""Pictures of `rheo.report.figures` on the page: ``pictures.show(picture, key="system")``."""

from __future__ import annotations

import math
from typing import Any

import streamlit as st

from rheo.report.picture import Picture
from ui import legend, state

_CONFIG = {
    "displaylogo": False,
    "displayModeBar": "hover",
    "modeBarButtonsToRemove": ["select2d", "lasso2d", "autoScale2d"],
    "responsive": True,
    "scrollZoom": False,
}


# Beyond so many decades every second one is named: on a telephone there is room for no more.
_MANY_DECADES = 7


def show(picture: Picture, key: str, *, select: Any = "ignore", title: bool = True) -> Any:
    """Draw a picture, with its title above and its description as alternative text.

    Parameters
    ----------
    picture : Picture
        From `rheo.report.figures`.
    key : str
        Widget key.
    select : callable or str
        Callback for clicks on points, as ``on_select`` of ``st.plotly_chart``.
    title : bool
        Whether to write the title.

    Returns
    -------
    object
        What ``st.plotly_chart`` returns: the selection, when there is a callback.
    """
    if title:
        st.markdown(f"**{picture.title}**")
    figure = picture.plotly(state.dark())
    key_to_it = legend.html(figure)
    if key_to_it:
        st.html(key_to_it)
    figure.update_layout(showlegend=False, margin={"l": 58, "r": 10, "t": 14, "b": 48})
    figure.update_xaxes(tickangle=0)
    along = figure.layout.xaxis
    _keep_words_inside(figure)
    if along.type == "log" and along.range[1] - along.range[0] > _MANY_DECADES:
        figure.update_xaxes(dtick=2)
    chosen: dict[str, Any] = {} if select == "ignore" else {"selection_mode": "points"}
    return st.plotly_chart(
        figure,
        key=key,
        theme=None,
        config=_CONFIG,
        on_select=select,
        alt=f"{picture.title}. {picture.description}",
        **chosen,
    )


def _keep_words_inside(figure: Any) -> None:
    """Write the names of strips in the right half towards the left, where there is room."""
    along = figure.layout.xaxis
    if along.range is None:
        return
    left, right = along.range
    for shape in figure.layout.shapes:
        if shape.type != "rect" or shape.xref != "x" or not shape.label.text:
            continue
        at = math.log10(shape.x0) if along.type == "log" else shape.x0
        if at > 0.5 * (left + right):
            shape.label.textposition = "top right"
