"""What can go wrong on the ground floor, as exceptions whose text is one sentence for the user."""


class MaterialError(ValueError):
    """A material, gas or lining is unknown, its file is wrong, or a property was asked out of range."""


class UnitError(MaterialError):
    """A text is not a quantity of the wanted dimension."""
