"""Which scripts a page loads, each after those that it needs as soon as it is read."""

from typing import Final

_ENGINE: Final = (
    "water",
    "temperature",
    "activity",
    "speciation",
    "balance",
    "newton",
    "bracketing",
    "equilibrium",
    "composition",
    "buffering",
    "titration",
    "subjects",
)

# What judges a reading, corrects, makes up and finds faults.
_FIELD: Final = (
    "recipes",
    "sensitivities",
    "uncertainty",
    "reserves",
    "measurements",
    "judging",
    "dosing",
    "gases",
    "air",
    "suspects",
    "faults",
    "weighing",
    "weighed_batch",
    "field_checks",
)

_PICTURES: Final = (
    "sheets",
    "explorations",
    "figure_ticks",
    "line_paths",
    "contours",
    "label_places",
    "figures",
    "figure_layout",
    "svg_figures",
    "bokeh_figures",
    "formatting",
    "figure_tables",
    "figure_csv",
    "plots",
    "explorer_plots",
)

_WORDS: Final = ("band_words", "make_up_words", "fault_words")

# A titration of one's own.
_TITRATION: Final = (
    "measured_layout",
    "measured",
    "experiments",
    "linear",
    "curve_derivatives",
    "fit_parameters",
    "fit_model",
    "fit_quality",
    "fitting",
    "end_points",
    "gran",
    "fit_words",
    "measured_plots",
    "titration_example",
    "titration_tables",
)

_PANEL: Final = (
    "panel_state",
    "panel_checks",
    "panel_inputs",
    "panel_answers",
    "panel_bokeh",
    "panel_tools",
    "panel_tables",
    "panel_figures",
)

# The sections of a sheet that answer a reading.
_SECTIONS: Final = (
    "panel_copy",
    "panel_judging",
    "panel_dosing",
    "panel_make_up",
    "panel_fault_rows",
    "panel_fault",
    "panel_titration_points",
    "panel_titration_show",
    "panel_titration_fit",
    "panel_titration",
    "panel_log_entries",
    "panel_log_store",
    "panel_log",
    "panel_field",
)

ENGINE_SCRIPTS: Final = (*_ENGINE, *_FIELD)
EXPLORER_SCRIPTS: Final = (*_ENGINE, *_PICTURES, *_PANEL, "panel")

# All that needs no page stands before all that does.
PURE_SCRIPTS: Final = (*ENGINE_SCRIPTS, *_PICTURES, *_WORDS, *_TITRATION)
SHEET_SCRIPTS: Final = (*PURE_SCRIPTS, *_PANEL, *_SECTIONS, "panel")

INDEX_SCRIPTS: Final = (
    "panel_state",
    "panel_index",
    "panel_tools",
    "panel_log_entries",
    "panel_log_store",
    "panel_log_index",
)

# What every page reads first, before it is shown.
FIRST_SCRIPT: Final = "panel_contrast"
