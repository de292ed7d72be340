"""The MkDocs adapter: thin, with no logic that the engine could hold."""
