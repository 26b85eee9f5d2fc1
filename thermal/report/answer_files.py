"""The files of an answer: the answer itself, the case it was asked of, and its picture."""

from pathlib import Path
from typing import TYPE_CHECKING

from thermal.case import Case, as_run
from thermal.questions.answer import Answer
from thermal.questions.compare import Comparison
from thermal.questions.frequency import FrequencyWindow
from thermal.questions.peak_temperature import PeakTemperature
from thermal.questions.time_to_temperature import TimeToTemperature
from thermal.report.answers import answer_json
from thermal.report.compare_figure import draw_compare
from thermal.report.curves import curves_csv
from thermal.report.figures import save_curves
from thermal.report.files import demand_place, with_materials_beside, write_folder
from thermal.report.frame import frame, save_figure
from thermal.report.frequency_figure import draw_frequency
from thermal.report.peak_figure import draw_peak
from thermal.report.words import piece_in_words

if TYPE_CHECKING:
    from matplotlib.figure import Figure

ANSWER, CASE = "answer.json", "case.toml"
PICTURES = {
    "time": ("curves.csv", "curves.png", "curves.svg"),
    "peak": ("peak.png", "peak.svg"),
    "compare": ("compare.png", "compare.svg"),
    "frequency": ("frequency.png", "frequency.svg"),
}
"""Files of each question besides the answer and the case."""


def demand_answer_place(folder: Path, question: str) -> None:
    """Refuse a folder an answer cannot be written to, before time is spent on it; see files.demand_place.

    Raises
    ------
    OutputError : the folder holds something else, or cannot be made.
    """
    demand_place(folder, True, (ANSWER, CASE, *PICTURES[question]))


def write_answer(folder: Path, answer: Answer[object], case: Case) -> None:
    """Write all files of an answer, at once or not at all; an earlier answer to the same question is replaced.

    Raises
    ------
    OutputError : the folder cannot be used, or writing fails.
    """

    def fill(fresh: Path) -> None:
        kept = with_materials_beside(fresh, case)
        (fresh / CASE).write_text(as_run(kept), encoding="utf-8", newline="\n")
        (fresh / ANSWER).write_text(answer_json(answer, case), encoding="utf-8", newline="\n")
        _picture(fresh, answer, case)

    write_folder(folder, (ANSWER, CASE, *PICTURES[answer.question]), fill, force=True)


def _picture(folder: Path, answer: Answer[object], case: Case) -> None:
    setup, result = answer.setup, answer.result

    def draw(figure: "Figure") -> None:
        match result:
            case PeakTemperature():
                draw_peak(figure, setup, result)
            case Comparison():
                draw_compare(figure, setup, result)
            case FrequencyWindow():
                draw_frequency(figure, setup, result)
        frame(figure, setup.title, answer.sentence, piece_in_words(setup, case))

    if isinstance(result, TimeToTemperature):
        text = curves_csv(result.setup, case, result.history)
        (folder / "curves.csv").write_text(text, encoding="utf-8", newline="\n")
        save_curves(result.setup, case, result.history, folder)
    else:
        save_figure(answer.question, folder, draw)
