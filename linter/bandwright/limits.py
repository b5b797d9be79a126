"""Every bound on work, as counts (bytes, nodes, orders, trials), never as seconds.

A loaded machine therefore finds exactly what an idle one finds.
"""

MAX_FILE_BYTES = 5 * 1024 * 1024
"""A larger band file is refused with a finding."""

MAX_YAML_DEPTH = 64
"""Deeper nesting of flow brackets is refused before it reaches the parser."""

MAX_YAML_NODES = 400_000
"""Nodes that one document may expand to, aliases counted each time they are used."""

MAX_PARSE_REPAIRS = 4
"""How often a block that does not parse is mended and tried again."""

MAX_NAMES_COMPARED = 256
"""How many names are looked at for the one that a misspelt name means."""

MAX_IIR_ORDER = 512
"""Orders beyond this are reported as "more than"; no filter of the trade comes near."""

MAX_SCANNED_ORDER = 64
"""Prototypes up to this order have their free edge sought over all lobes of several stop bands."""

MAX_EXACT_TAPS = 2_000
"""The longest FIR filter that the exchange is asked to design."""

MAX_EXCHANGE_STEPS = 200
"""Steps of one exchange; most designs take fewer than ten."""

MAX_LENGTH_TRIALS = 12
"""Exchanges for one length of an FIR filter: other places of floating windows, closer limits."""

MAX_UNDECIDED_LENGTHS = 4
"""FIR lengths that rounding leaves undecided before a search for the least one gives up."""

MAX_SEARCHED_WORD_BITS = 160
"""The longest coefficient word that the exact search tries."""

MAX_COMPARED_GAINS = 1_000
"""Places of the pass bands whose gains a prediction of coefficient bits compares with one another."""

MAX_ANALYSES_KEPT = 16_384
"""Analyses kept by the value of their filter; more than the filters of the largest band file."""

MAX_RECENT_ANALYSES = 512
"""Analyses that the server keeps besides those of the open files, for edits that are undone."""

MAX_ANSWERS_KEPT = 4_096
"""Answers kept for reuse; one that is in use is never dropped."""

MAX_FIX_ROUNDS = 64
"""Rounds of remedies that keep the requirement; a round mends one finding of each block."""

MAX_WORKER_DEATHS = 2
"""How many workers may die of a question before it is left unanswered."""
