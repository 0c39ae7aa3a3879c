"""The page: main script of ``rheo open`` and ``streamlit run ui/app.py``.

It draws what all stops share (side bar with the walk, the units and the case) and runs the stop
that the address names.
"""

from __future__ import annotations

import streamlit as st

from ui import case_menu, guard, imported, many_draws, reload, state, style, units_switch, walk

# Drawn here: a named icon would be fetched from the network.
_ICON = (
    '<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 32 32"><rect width="32" height="32" '
    'rx="6" fill="#0559b7"/><path d="M6 26C8 15 15 9 27 7" fill="none" stroke="#fff" '
    'stroke-width="3.6" stroke-linecap="round"/></svg>'
)
st.set_page_config(page_title="rheo", page_icon=_ICON, layout="wide")


def main() -> None:
    """Draw the page."""
    reload.begin()
    style.apply()
    pages = walk.pages()
    page = st.navigation(list(pages.values()), position="hidden")
    with st.spinner("Working out the case"):
        drawn = many_draws.begin()
        if drawn:
            guard.run(lambda: state.result())
    with st.sidebar:
        case = state.case()
        st.html(
            '<div class="rheo-brand">rheo</div>'
            f'<div class="rheo-case">{style.escape(case.title or case.product.name, 90)}</div>'
        )
        if drawn:
            guard.run(lambda: walk.show(pages))
        units_switch.show()
        case_menu.show()
    try:
        guard.run(page.run if drawn else many_draws.show)
    finally:
        # Also where a stop ends the run of the script early.
        reload.keep()
        imported.settle()


main()
