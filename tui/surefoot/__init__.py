"""surefoot: the solve of one implicit equation, reproduced, walked, explained, cured, assessed and recorded."""

__version__ = "0.1.0"
