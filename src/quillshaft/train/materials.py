"""Built-in materials: ordinary figures, listed as assumed wherever they are used (common practice)."""

from __future__ import annotations

from quillshaft.train.shaft_model import Material

BUILT_IN: dict[str, Material] = {
    name: Material(name, modulus * 1e9, density)
    for name, modulus, density in (
        ("steel", 80.0, 7850.0),
        ("stainless-steel", 77.0, 7950.0),
        ("nodular-iron", 65.0, 7150.0),
        ("aluminium", 26.0, 2700.0),
        ("titanium", 43.0, 4430.0),
        ("bronze", 41.0, 8700.0),
    )
}
