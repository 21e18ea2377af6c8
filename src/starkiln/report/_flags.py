"""What each flag and status of the results means, in a sentence that says what to do."""

from __future__ import annotations

FLAG_MEANINGS = {
    "poor_blackbody": (
        "the quoted errors alone do not allow this emitter; the misfit makes up for it and "
        "widens the errors: look at the residuals before trusting the temperature"
    ),
    "prior_dominated": (
        "the posterior is hardly narrower than its prior: the photometry says little of this "
        "quantity; add a band, a parallax or a spectroscopic temperature"
    ),
    "at_edge": (
        "the posterior runs into a bound of its prior: the value is a limit at best; widen the "
        "prior if the bound is not physical"
    ),
    "degenerate": (
        "temperature and extinction trade off: the same colours fit a hot dusty and a cool clear "
        "star; give A_V with its error"
    ),
    "few_bands": "fewer than three usable bands: the fit leans on its priors",
    "dust_assumed_zero": (
        "no extinction was given, so none was assumed; dust would make the star hotter than told"
    ),
    "saturated": (
        "a band is brighter than its survey's detectors take; its error was widened or the band "
        "left out"
    ),
}

STATUS_MEANINGS = {
    "ok": "fitted, and the sampler met its stopping rule",
    "unconverged": (
        "fitted, but the sampler reached its ceiling first: medians are fair, errors uncertain; "
        "raise sampling.max_steps"
    ),
    "rejected": "not fitted; the message says why and what would help",
}
