"""The reference engine: emcee's ensemble sampler with a located start and a stopping rule.

A third of the moves are differential evolution (Foreman-Mackey et al. 2013, PASP 125,
306, for the ensemble; ter Braak 2006, Stat. Comput. 16, 239, for the move); the others
are independent proposals about a population. In a few short rounds, which are thrown
away, that population is drawn anew from the ensemble; then it is fixed and the chain
that counts begins. The snooker move is left out on purpose: it is biased in the emcee
releases this was built on.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from starkiln.inference._autocorrelation import autocorrelation_time
from starkiln.inference._problem import Problem
from starkiln.inference._samples import Samples
from starkiln.inference.engines._proposal import PopulationProposal
from starkiln.inference.engines._tempered import POPULATION, tempered_start

#: Autocorrelation times that are thrown away before the kept chain.
BURN_IN_LENGTHS = 5
#: The chain is looked at after so many steps, and then each time it has grown by a third.
_FIRST_LOOK, _GROWTH = 150, 1.33
#: Rounds that shape the proposals, and the steps of each.
_ROUNDS, _ROUND_STEPS = 3, 60


def run_ensemble(problem: Problem, rng: np.random.Generator) -> Samples:
    """Explore the posterior with emcee until the stopping rule is met.

    The rule: after a burn-in of `BURN_IN_LENGTHS` autocorrelation times, the kept
    chain is at least `settings.autocorrelation_lengths` autocorrelation times long
    in every parameter, and holds at least `settings.effective_draws` effective
    draws (steps times walkers over the autocorrelation time; Goodman & Weare 2010,
    Comm. App. Math. Comp. Sci. 5, 65). A chain that reaches `settings.max_steps`
    first is returned as unconverged.

    Parameters
    ----------
    problem : Problem
    rng : numpy.random.Generator

    Returns
    -------
    Samples
    """
    import emcee

    settings = problem.settings
    population = tempered_start(problem, rng)
    state = emcee.State(population[: settings.walkers], random_state=_random_state(rng))
    for _ in range(_ROUNDS):
        sampler = _sampler(problem, population)
        state = sampler.run_mcmc(state, _ROUND_STEPS, skip_initial_state_check=True)
        recent = sampler.get_chain(discard=_ROUND_STEPS // 2, flat=True)
        population = recent[rng.choice(len(recent), min(POPULATION, len(recent)), replace=False)]
    sampler = _sampler(problem, population)
    steps = _FIRST_LOOK
    while True:
        steps = min(steps, settings.max_steps)
        more = steps - sampler.iteration
        state = sampler.run_mcmc(state, more, skip_initial_state_check=True)
        chain = sampler.get_chain()
        burn, tau = _split(chain)
        kept = len(chain) - burn
        n_eff = kept * settings.walkers / tau.max()
        converged = bool(
            kept >= settings.autocorrelation_lengths * tau.max()
            and n_eff >= settings.effective_draws
        )
        if converged or len(chain) >= settings.max_steps:
            break
        steps = max(int(_GROWTH * len(chain)), len(chain) + 100)
    message = "" if converged else _shortfall(len(chain), kept, tau.max(), n_eff, problem)
    return Samples(
        x=chain[burn:].reshape(-1, chain.shape[2]),
        n_eff=float(n_eff),
        converged=converged,
        message=message,
        ln_evidence=np.nan,
        chain=chain,
        burn_in=burn,
        autocorrelation=tau,
    )


def _sampler(problem: Problem, population: np.ndarray) -> Any:
    import emcee

    funnel = problem.names.index("ln_misfit") if "ln_misfit" in problem.names else None
    proposal = PopulationProposal(population, funnel)
    dimension = population.shape[1]
    moves = [(emcee.moves.DEMove(), 0.35), (emcee.moves.MHMove(proposal, ndim=dimension), 0.65)]
    sampler = emcee.EnsembleSampler(
        problem.settings.walkers, dimension, problem.ln_posterior, vectorize=True, moves=moves
    )
    # emcee's wrapper of the function prints a traceback when Ctrl-C meets it; bare, the
    # interruption goes its way.
    sampler.log_prob_fn = problem.ln_posterior
    return sampler


def _split(chain: np.ndarray) -> tuple[int, np.ndarray]:
    """Return the burn-in and the autocorrelation time of each parameter after it."""
    tau = autocorrelation_time(chain)
    burn = int(min(BURN_IN_LENGTHS * tau.max() + 1, len(chain) // 2))
    return burn, autocorrelation_time(chain[burn:])


def _random_state(rng: np.random.Generator) -> Any:
    words = rng.integers(0, 2**32, size=8, dtype=np.uint64)
    return np.random.RandomState(np.random.MT19937(np.random.SeedSequence(words))).get_state()


def _shortfall(steps: int, kept: int, tau: float, n_eff: float, problem: Problem) -> str:
    return (
        f"after {steps} steps the chain is {kept / tau:.0f} autocorrelation times long and holds "
        f"{n_eff:.0f} effective draws ({problem.settings.autocorrelation_lengths} and "
        f"{problem.settings.effective_draws} wanted); raise sampling.max_steps"
    )
