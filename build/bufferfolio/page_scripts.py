"""Which scripts a page loads, in which order."""

from typing import Final

# Each after those that it needs as soon as it is read.
SCRIPTS: Final = (
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
    "field_checks",
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
    "fault_words",
    "figure_tables",
    "figure_csv",
    "plots",
    "explorer_plots",
    "panel_state",
    "panel_checks",
    "panel_inputs",
    "panel_answers",
    "panel_bokeh",
    "panel_tools",
    "panel_tables",
    "panel_figures",
    "band_words",
    "panel_copy",
    "panel_judging",
    "panel_dosing",
    "panel_fault_rows",
    "panel_fault",
    "panel_log_entries",
    "panel_log_store",
    "panel_log",
    "panel_field",
    "panel",
)

# What a sheet needs besides for a titration of one's own, before anything of the panel.
TITRATION_SCRIPTS: Final = (
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
)
_PANEL: Final = SCRIPTS.index("panel_state")
SHEET_SCRIPTS: Final = (*SCRIPTS[:_PANEL], *TITRATION_SCRIPTS, *SCRIPTS[_PANEL:])

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
