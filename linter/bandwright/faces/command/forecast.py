"""`bandwright forecast`: what each family of filters would take."""

from __future__ import annotations

from argparse import Namespace

from bandwright.analysis.settle_forecast import every_question, settle_forecast
from bandwright.bandfile import reader
from bandwright.bandfile.values import Document, Filter
from bandwright.exact.answer import answer
from bandwright.faces import forecast_table
from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import Parser, one_of
from bandwright.faces.command.checking import STDIN, Checker, decoded
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.suggestion import suggestion
from bandwright.forecast.forecast import Forecast


def configure(parser: Parser) -> None:
    """Declare the options."""
    parser.add_argument("file", metavar="FILE", help="a band file, or - for standard input")
    parser.add_argument("filter", metavar="FILTER", nargs="?", help="one filter (default: all of the file)")
    parser.add_argument(
        "--as",
        dest="form",
        metavar="FORM",
        type=one_of("text", "json"),
        default="text",
        help="text (default): tables; json: every figure, for other programs",
    )
    parser.add_argument(
        "--certainty",
        metavar="CERTAINTY",
        type=one_of("estimated", "computed", "proved"),
        default="computed",
        help="how sure the figures should be at least: estimated (quick), computed (default) or proved",
    )
    parser.add_argument(
        "--plot",
        metavar="FILE.svg",
        help="also draw the mask of one filter and the responses of its candidates",
    )


def run(arguments: Namespace) -> int:
    """Print the forecasts; 0, whatever they say."""
    if arguments.certainty == "proved":
        raise CommandError(
            "bandwright forecast: proofs are not available in this version; "
            "`--certainty computed` is the surest that there is."
        )
    text = decoded(arguments.file)
    document = reader.read(text.text, fault=text.fault)
    chosen = _chosen(document, arguments.filter, arguments.file)
    if arguments.plot is not None and len(chosen) > 1:
        names = ", ".join(filter.name for _, filter in chosen)
        raise CommandError(f"{arguments.file}: a plot shows one filter; name one of {names}.")
    # All figures of all structures are in the JSON; the text shows those of the filter's own structure.
    questions = forecast_table.questions if arguments.form == "text" else every_question
    checker = Checker()
    forecasts = []
    for line, filter in chosen:
        checker.progress.show(filter.name)
        forecast = Forecast(filter, checker.answers)
        if arguments.certainty == "computed":
            forecast = settle_forecast(forecast, checker.answers, answer, questions)
        forecasts.append((line, forecast))
    checker.progress.clear()
    if arguments.plot is not None:
        from bandwright.faces.command.plotting import write_plot

        write_plot(forecasts[0][1], arguments.plot)
    if arguments.form == "json":
        from bandwright.faces.command.formats import forecast_json

        name = "standard-input" if arguments.file == STDIN else arguments.file
        terminal.show(
            forecast_json.document(forecast_json.record(name, line, one) for line, one in forecasts)
        )
    else:
        from bandwright.faces.command.formats import forecast_text

        terminal.show("\n\n".join(forecast_text.text(one) for _, one in forecasts))
    return 0


def _chosen(document: Document, name: str | None, file: str) -> list[tuple[int, Filter]]:
    """The filters asked for, each with the line of its name, counted from 1."""
    filters = [(document.blocks[block].first_line + 1, filter) for block, filter in document.filters]
    if not filters:
        raise CommandError(f"{file}: there is no filter in it; `bandwright check {file}` says what is wrong.")
    if name is None:
        return filters
    found = [(line, filter) for line, filter in filters if filter.name == name]
    if not found:
        names = [filter.name for _, filter in filters]
        raise CommandError(f"{file}: there is no filter `{name}`; {suggestion(name, names)}")
    return found
