"""What a chain is predicted to do, with its doubt by source."""

from logbook.prediction.data import TOTAL_UNITS, Estimate, Node, Prediction, Terms
from logbook.prediction.predict import FIRST_ORDER_UP_TO_DB, Predictor, by_monte_carlo, predict, wide_inputs

__all__ = [
    "FIRST_ORDER_UP_TO_DB",
    "TOTAL_UNITS",
    "Estimate",
    "Node",
    "Prediction",
    "Predictor",
    "Terms",
    "by_monte_carlo",
    "predict",
    "wide_inputs",
]
