"""[shafts]: the row of a shaft, its pieces and what they carry, and crank throws; SI floats after validation."""

from typing import Annotated, Literal, Self

from pydantic import Field, StrictInt, model_validator

from quillshaft.train.duty_model import Surface
from quillshaft.train.duty_rows import ShaftLimitKeys, StressFactor, check_hole, check_limits
from quillshaft.train.fields import (
    Bores,
    Count,
    Diameters,
    Flexibility,
    HubLengths,
    Inertia,
    Length,
    LengthOrZero,
    Name,
    Share,
    Stiffness,
    Temperature,
    complain,
)
from quillshaft.train.rows import Row, SpringRow, exactly_one, one_loss_factor

EQUAL = 1e-9
DEEPEST_KEYWAY, NARROWEST_KEYWAY, WIDEST_KEYWAY = 0.5, 0.3, 2.0


Cuts = Annotated[StrictInt, Field(ge=2, le=512)]


class KeywayRow(Row):
    """One keyway with a flat bottom; along the whole piece unless `length` is given."""

    width: Length
    depth: Length
    length: Length | None = None


class SplineRow(Row):
    """Splines: outer and root diameter; `share` of the tooth height that carries torque."""

    major: Length
    minor: Length
    share: Share | None = None

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        if not self.minor < self.major:
            raise complain("must stay below major", "the root diameter of the splines", "minor")
        if self.share is not None and self.share > 1:
            raise complain("is more than the whole tooth", "0 % (root circle) to 100 % (outer circle)", "share")
        return self


class SectionRow(Row):
    """A solid section that is not round."""

    rectangle: Annotated[list[Length], Field(min_length=2, max_length=2)] | None = None
    square: Length | None = None

    @model_validator(mode="after")
    def _one(self) -> Self:
        exactly_one(self, ("rectangle", "square"))
        if self.rectangle is not None and max(self.rectangle) > 20 * min(self.rectangle):
            raise complain("is a strip, not a shaft", "two sides within a factor of 20", "rectangle")
        return self


class PieceRow(Row):
    """One length of a shaft given by its geometry: od | section | spline | flange."""

    od: Diameters | None = None
    id: Bores | None = None
    length: LengthOrZero
    section: SectionRow | None = None
    spline: SplineRow | None = None
    flange: Length | None = None
    keyway: KeywayRow | None = None
    hub: HubLengths | None = None
    hub_rule: Share | None = None
    fillet: Length | None = None
    cross_hole: Length | None = None
    stress_factor: StressFactor | None = None
    surface: Surface | None = None
    temperature: Temperature | None = None

    @property
    def outer(self) -> tuple[float, float]:
        """Outer diameters [m] at both ends; of a section that is not round, its shorter side."""
        if self.od is not None:
            return self.od
        if self.section is not None:
            return (min(self.section.rectangle or [self.section.square or 0.0]),) * 2
        return (self.spline.major if self.spline is not None else self.flange or 0.0,) * 2

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        exactly_one(self, ("od", "section", "spline", "flange"))
        if min(self.outer) <= 0:
            raise complain("must be above zero at both ends", None, "od")
        root = (self.spline.minor,) * 2 if self.spline is not None else self.outer
        if self.id is not None and any(bore >= outer for bore, outer in zip(self.id, root, strict=True)):
            raise complain(f"must stay below {'minor' if self.spline else 'od'} at both ends", None, "id")
        if self.id is not None and self.section is not None:
            raise complain("a section that is not round is taken as solid", "no id", "id")
        if self.length <= 0 and (self.hub is None or self.flange is not None):
            raise complain("must be above zero, unless the piece is all in a hub", None, "length")
        if self.keyway is not None:
            self._groove(self.keyway)
        self._raisers()
        return self

    def _raisers(self) -> None:
        for key in ("cross-hole", "stress-factor", "surface"):
            if self.flange is not None and getattr(self, key.replace("-", "_")) is not None:
                raise complain("a flange is taken as rigid, no stress is judged in it", "a piece that twists", key)
        if self.cross_hole is not None and self.section is not None:
            raise complain("a radial hole needs a round piece", "od or spline; or stress-factor", "cross-hole")
        check_hole(self.cross_hole, min(self.outer))

    def _groove(self, keyway: KeywayRow) -> None:
        if self.od is None or self.od[0] != self.od[1]:
            raise complain("a keyway needs a round piece of one diameter", "od with one value", "keyway")
        radius = self.od[0] / 2
        if self.id is not None and max(self.id) / 2 >= radius - keyway.depth:
            raise complain(
                "cuts through to the bore", f"a depth below {(radius - max(self.id) / 2) * 1e3:.4g} mm", "keyway"
            )
        if keyway.length is not None and keyway.length > self.length + sum(self.hub or ()):
            raise complain("is longer than its piece", "a length up to that of the piece with its hubs", "keyway")
        shape, depth = keyway.width / 2 / keyway.depth, keyway.depth / radius
        widest = 1.5 if depth > 0.25 else WIDEST_KEYWAY
        if depth > DEEPEST_KEYWAY + EQUAL or not NARROWEST_KEYWAY - EQUAL <= shape <= widest + EQUAL:
            seen = f"has half width over depth {shape:.3g} and depth over radius {depth:.3g}: beyond its formula"
            allowed = (
                f"half width over depth {NARROWEST_KEYWAY:g} to {widest:g}, depth over radius up to {DEEPEST_KEYWAY:g}"
            )
            raise complain(seen, allowed, "keyway")


class ThrowRow(Row):
    """A crank throw, from the middle of one crankpin to the middle of the next."""

    journal: Length
    journal_length: Length
    journal_bore: Length | None = None
    pin: Length
    pin_length: Length
    pin_bore: Length | None = None
    web_thickness: Length
    web_width: Length
    radius: Length
    web_inertia: Inertia | None = None
    formula: Literal["carter", "ker-wilson"] | None = None

    @model_validator(mode="after")
    def _sizes(self) -> Self:
        for bore, outer, key in (
            (self.journal_bore, self.journal, "journal-bore"),
            (self.pin_bore, self.pin, "pin-bore"),
        ):
            if bore is not None and bore >= outer:
                raise complain("must stay below the diameter it is bored in", f"0 to below {outer * 1e3:.4g} mm", key)
        if self.formula == "ker-wilson" and self.radius <= 0.2 * (self.journal + self.pin):
            allowed = f"more than 0.2 · (journal + pin) = {0.2e3 * (self.journal + self.pin):.4g} mm, or carter"
            raise complain("is too small for the formula of Ker Wilson", allowed, "radius")
        return self


class EquivalentRow(Row):
    """A plain round bar of the same stiffness."""

    length: Length
    diameter: Length


class ShaftRow(ShaftLimitKeys, SpringRow):
    """[shafts]: stiffness | flexibility | equivalent | pieces | throw."""

    stiffness: Stiffness | None = None
    flexibility: Flexibility | None = None
    equivalent: EquivalentRow | None = None
    pieces: Annotated[list[PieceRow], Field(min_length=1, max_length=200)] | None = None
    throw: ThrowRow | None = None
    material: Name | None = None
    temperature: Temperature | None = None
    shoulder: Literal["none", "fillet", "sharp"] | None = None
    own_inertia: Literal["ends", "none", "distributed"] | None = None
    cuts: Cuts | None = None
    repeat: Count | None = None

    @model_validator(mode="after")
    def _spelling(self) -> Self:
        exactly_one(self, ("stiffness", "flexibility", "equivalent", "pieces", "throw"))
        one_loss_factor(self)
        if self.pieces is None and self.throw is None and self.own_inertia == "ends":
            raise complain("needs the geometry", "pieces or throw, or leave this key out", "own-inertia")
        if self.pieces is None and self.own_inertia == "distributed":
            raise complain("needs pieces to distribute it over", "pieces, or another way", "own-inertia")
        if self.cuts is not None and self.own_inertia != "distributed":
            raise complain("cuts a shaft of distributed inertia", 'own-inertia = "distributed" beside it', "cuts")
        if self.own_inertia == "distributed" and self.referred_to is not None:
            raise complain("a distributed shaft stands at its own speed", "no referred-to", "referred-to")
        if self.pieces is None and self.shoulder is not None:
            raise complain("needs the geometry", "pieces, or leave this key out", "shoulder")
        if self.temperature is not None and (self.stiffness is not None or self.flexibility is not None):
            raise complain("a stiffness as given holds at its own temperature", "no temperature", "temperature")
        if self.pieces is not None:
            self._pieces(self.pieces)
        check_limits(self)
        return self

    def _pieces(self, pieces: list[PieceRow]) -> None:
        if all(piece.flange is not None for piece in pieces):
            raise complain("holds flanges alone, and these are taken as rigid", "a piece that twists", "pieces")
        if self.shoulder == "fillet" and all(piece.fillet is None for piece in pieces):
            raise complain(
                "needs the fillet radius of a piece", 'fillet = "5 mm" on a piece, or shoulder = "sharp"', "shoulder"
            )
