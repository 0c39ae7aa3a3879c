"""Route."""

from __future__ import annotations

import streamlit as st

from ui import answer_strip, cautions, walk

st.header("Route")
result = answer_strip.need_result()
cautions.show(result.line.cautions)
cautions.safety("pressure", "start-up")
walk.onward("route")
