"""What holds for every test: no example fails for having taken long (a first one may compile a kernel)."""

from hypothesis import settings

settings.register_profile("untimed", deadline=None)
settings.load_profile("untimed")
