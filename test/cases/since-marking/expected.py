"""Makes captures.csv and expected/*.csv: python3 expected.py. Every number of animals is the expected one, exactly."""
import itertools, pathlib
from fractions import Fraction as F

here = pathlib.Path(__file__).parent
YEARS = ["2001", "2002", "2003", "2004", "2005"]
FIRST, LATER, P = F(4, 10), F(8, 10), F(5, 10)
MARKED = 100_000

def probability(history):
    """Of what follows the first capture, summed over when it may have died."""
    first, last = history.index(1), 4 - history[::-1].index(1)
    total = F(0)
    for lives_to in range(last, 5):
        one = F(1)
        for t in range(first, lives_to):
            one *= FIRST if t == first else LATER
            one *= P if history[t + 1] else 1 - P
        if lives_to < 4:
            one *= 1 - (FIRST if lives_to == first else LATER)
        total += one
    return total

with open(here / "captures.csv", "w") as out:
    print("mark,animals," + ",".join(YEARS), file=out)
    for history in itertools.product([1, 0], repeat=5):
        if not any(history):
            continue
        number = MARKED * probability(list(history))
        assert number.denominator == 1
        if number:
            print("h" + "".join(map(str, history)), number, *history, sep=",", file=out)
(here / "winters.csv").write_text("interval,ice\n" + "".join(
    f"{a} to {b},{ice}\n" for a, b, ice in zip(YEARS, YEARS[1:], [3, 1, 4, 2])))
(here / "expected").mkdir(exist_ok=True)
with open(here / "expected/apparent-survival.csv", "w") as out:
    print("model,stratum,interval,survival", file=out)
    for model in ("each interval its own", "chosen by years", "chosen by animals", "constant"):
        for when, s in (("later intervals", LATER), ("first interval", FIRST)):
            for t in range(4):
                print(model, f'"all animals, {when}"', f"{YEARS[t]} to {YEARS[t + 1]}", float(s), sep=",", file=out)
