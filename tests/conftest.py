"""Settings of the whole suite."""

from hypothesis import Phase, settings

# The same examples in every run, so that a red test is red for everybody; no deadline, since machines differ;
# no shrinking, since minutes of it would only make the failing layout smaller.
settings.register_profile("repeatable", deadline=None, derandomize=True, max_examples=15,
                          phases=(Phase.explicit, Phase.generate))
settings.load_profile("repeatable")
