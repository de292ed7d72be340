"""The keys that say how something was read, alike in every kind of block that reads."""

from __future__ import annotations

from logbook.fields import Field, choice, many, quantity, text

AVERAGING = ("power", "log", "voltage", "peak")

SETTING_FIELDS = (
    Field("chain", text()),
    Field("bench", text()),
    Field("through", many(text(), least=0)),
    Field("rbw", quantity("frequency", positive=True)),
    Field("vbw", quantity("frequency", positive=True)),
    Field("averaging", choice(*AVERAGING)),
    Field("shown_at", choice("instrument", "unit")),
    Field("temperature", quantity("temperature")),
)
