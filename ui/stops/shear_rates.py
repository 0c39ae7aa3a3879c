"""Shear rates."""

from __future__ import annotations

import streamlit as st

from ui import answer_strip, cautions, walk

st.header("Shear rates")
answer_strip.show()
cautions.safety("pressure", "start-up")
walk.onward("shear_rates")
