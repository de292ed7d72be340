"""What a chain is predicted to do, with its doubt by source."""

from logbook.prediction.data import TOTAL_UNITS, Estimate, Node, Prediction, Terms
from logbook.prediction.predict import Predictor, predict

__all__ = ["TOTAL_UNITS", "Estimate", "Node", "Prediction", "Predictor", "Terms", "predict"]
