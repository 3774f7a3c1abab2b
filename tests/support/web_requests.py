"""One request in many wordings."""

SPELLINGS = {"cm^-3": ["cm^-3", "1/cm^3", "cm-3", "cm⁻³"], "nm": ["nm"], "K": ["K"]}


def film_in_other_words(shuffle):
    """Return the same film with its members in another order and its units in another spelling."""

    def unit(symbol):
        return symbol if shuffle is None else shuffle.choice(SPELLINGS[symbol])

    def ordered(members):
        items = list(members.items())
        if shuffle is not None:
            shuffle.shuffle(items)
        return dict(items)

    return ordered(
        {
            "carrier_density": ordered({"value": 2e19, "unit": unit("cm^-3")}),
            "geometry": ordered({"kind": "film", "thickness": ordered({"value": 20, "unit": unit("nm")})}),
            "temperature": ordered({"value": 300, "unit": unit("K")}),
            "band": ordered({"effective_mass": 0.2, "valleys": 1}),
        }
    )
