"""Readings."""

from __future__ import annotations

import streamlit as st

from ui import answer_strip, cautions, walk

st.header("Readings")
answer_strip.show()
cautions.safety("pressure", "start-up")
walk.onward("readings")
