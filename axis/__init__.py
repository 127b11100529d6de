"""Settlepoint: size and tune a positioning axis before it exists.

    import axis

    study = axis.tune(axis.size(axis.load("my-axis.toml")))
    print(study.verdict)

The names of the library come from `axis.study` when they are first asked for, so that `import axis` costs nothing.
"""

from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from axis.study import check, load, size, tune

__all__ = ["check", "load", "size", "tune"]


def __getattr__(name: str) -> Any:
    if name in __all__:
        from axis import study

        return getattr(study, name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")


def __dir__() -> list[str]:
    return sorted([*globals(), *__all__])
