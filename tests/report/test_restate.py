"""Sentences of the engine in other units."""

import pytest

from rheo.report.restate import restated


@pytest.mark.parametrize(
    ("system", "sentence", "wanted"),
    [
        ("metric", "lobe pump moves 4.31 m3/h.", "lobe pump moves 4.31 m³/h."),
        # 4.31 m3/h = 18.98 US gal/min; 3.22 bar = 46.70 psi.
        ("us", "lobe pump moves 4.31 m3/h at 3.22 bar.", "lobe pump moves 19.0 gpm at 46.7 psi."),
        ("si", "lobe pump moves 4.31 m3/h at 3.22 bar.", "lobe pump moves 1.20 L/s at 322 kPa."),
        ("us", "between 0 and 75 m3/h: the line", "between 0 and 330 gpm: the line"),
        ("us", "12.5 m (95.2 L) flushed", "41.0 ft (25.1 US gal) flushed"),
        ("us", "at 39.0 to 40.0 °C there", "at 102 to 104 °F there"),
        ("us", "warms the product by 5.0 K on", "warms the product by 9.00 °F on"),
        ("us", "2.77 m/s (at most 1.5 m/s allowed)", "9.09 ft/s (at most 4.92 ft/s allowed)"),
        ("us", "viscosity of 12 mPa.s at 30 1/s", "viscosity of 12 mPa.s at 30 1/s"),
        ("metric", "wall shear rate 1.33e+03 1/s", "wall shear rate 1330 1/s"),
        ("us", "DN 50 m3/hX and ISO 2037 51 mx", "DN 50 m3/hX and ISO 2037 51 mx"),
        ("us", "−0.5 bar gauge", "−7.25 psi gauge"),
    ],
)  # fmt: skip
def test_numbers_are_restated(system, sentence, wanted):
    assert restated(sentence, system) == wanted
