"""How unsure each correction method is, and where that is known from."""

from basinheat.tables.contract import Table, flag, number, text
from basinheat.tables.contract import count as whole


class MethodSigmas(Table):
    """One row per method and class of variance; a method never used has one without numbers."""

    columns = {
        "method": text("correction method"),
        "title": text("in words"),
        "kind": text("kind of reading it treats"),
        "in_order": flag("named in correction.order"),
        "variance_class": text("readings whose stated variance is scaled together"),
        "n_estimates": whole("temperatures by it"),
        "known_bias": text("what is known of its bias, and subtracted"),
        "temperature_std_k": number("K", "independent part, median over its sets"),
        "well_std_k": number("K", "part common to a well, median"),
        "shared_std_k": number("K", "part shared by all its results, median"),
        "scale": number("", "factor the fit found on the stated variance, 1 where as stated"),
        "verdict": text("in words, where the scale lies outside 0.5 to 2"),
        "stated_total_k": number("K", "total as published or agreed, NaN: worked out set by set"),
        "stated_shared_k": number("K", "shared part as agreed, NaN: worked out set by set"),
        "source": text("where the uncertainty comes from"),
        "reference": text("publication of the method"),
        "status": text("how its coefficients came here: seen or from memory"),
        "validity": text("where it holds"),
        "regions": text("regions it was made for, ;-joined; empty: anywhere"),
        "top_m": number("m", "shallowest depth it was made for"),
        "base_m": number("m", "deepest depth it was made for, inf: none stated"),
    }
