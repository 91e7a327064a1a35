"""The one gate for input: TOML files to typed, frozen studies in SI, and back."""

from tcopt.study.cascade import CascadeStudy
from tcopt.study.choices import Choice, Span
from tcopt.study.circuit import CircuitChoices
from tcopt.study.deviations import CommonPart
from tcopt.study.layout import Layout
from tcopt.study.load import load_process, load_question, load_study
from tcopt.study.part import Part, drawn_material, drawn_value
from tcopt.study.process import Material, Process
from tcopt.study.question import (
    GRADES,
    FixedSlot,
    OpenSlot,
    Search,
    TemperatureRange,
)
from tcopt.study.spread import OUTPUT_MIRROR, Insertion, Spread, Trim
from tcopt.study.start import write_first_study
from tcopt.study.study import Study
from tcopt.study.target import Limit, Target
from tcopt.study.transistors import BaseEmitter, MosTransistor, Transistor
from tcopt.study.write import study_text

__all__ = [
    "GRADES", "OUTPUT_MIRROR", "BaseEmitter", "CascadeStudy", "Choice", "CircuitChoices",
    "CommonPart", "FixedSlot", "Insertion", "Layout", "Limit", "Material", "MosTransistor",
    "OpenSlot", "Part", "Process", "Search", "Span", "Spread", "Study", "Target",
    "TemperatureRange", "Transistor", "Trim", "drawn_material", "drawn_value", "load_process",
    "load_question", "load_study", "study_text", "write_first_study",
]  # fmt: skip
